// Requirements held against what was got.
#pragma once

#include <glint/plan/assessment.h>
#include <span>
#include <vector>

namespace glint {

/// Judges every requirement of the design. `assessment` must hold everything but requirements and findings.
/// Errors: a requirement on an object that the scene does not have.
[[nodiscard]] std::vector<RequirementResult> judge_requirements(const Design& design,
                                                                const Assessment& assessment,
                                                                const Link& link,
                                                                std::span<const PixelLight> lights);

/// Distances that the pixels reach for one range requirement.
[[nodiscard]] ReachSummary summarize_reach(const Link& link, std::span<const PixelLight> lights,
                                           const RangeRequirement& range);

}  // namespace glint
