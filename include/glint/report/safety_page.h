// The verdict on eye safety as text and as JSON.
#pragma once

#include <glint/safety/verdict.h>

#include <string>

namespace glint {

/// A page for people, at most 80 columns wide, the caution at its head: class and margin, the governing case
/// in words, the worst case of every criterion with the rule behind its limit, what would still hold,
/// distances, faults.
[[nodiscard]] std::string safety_text(const Design& design, const SafetyVerdict& verdict);

/// The part of that page that says how the design stands, without caution and faults, for use in a longer
/// one.
[[nodiscard]] std::string safety_section(const SafetyVerdict& verdict);

/// One JSON object, two-space indent, newline at the end; SI numbers with the unit in the key, the caution
/// first.
[[nodiscard]] std::string safety_json(const SafetyVerdict& verdict);

}  // namespace glint
