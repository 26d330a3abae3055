// The answer of `glintplan limits` as JSON and as a text table.
#pragma once

#include <glint/safety/limits_query.h>
#include <string>

namespace glint {

/// One JSON object, two-space indent, newline at the end; SI numbers with the unit in the key, null where a
/// value does not apply, the caution first.
[[nodiscard]] std::string limits_json(const LimitsAnswer& answer);

/// A table for people, at most 80 columns wide, the caution at its head.
[[nodiscard]] std::string limits_text(const LimitsAnswer& answer);

}  // namespace glint
