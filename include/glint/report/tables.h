// The assessment as text: verdict table, JSON summary, zone table.
#pragma once

#include <glint/plan/assessment.h>
#include <string>

namespace glint {

/// The verdict for a terminal, at most 80 columns: caution, requirements with needed, got, margin and what
/// limits, chip, eye safety, findings.
[[nodiscard]] std::string verdict_text(const Design& design, const Assessment& assessment);

/// summary.json: one object, numbers in SI with the unit in the key, the caution first.
[[nodiscard]] std::string summary_json(const Design& design, const Assessment& assessment);

/// zones.csv: a header row with units, one row a zone.
[[nodiscard]] std::string zones_csv(const Assessment& assessment);

}  // namespace glint
