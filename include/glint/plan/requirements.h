// Requirements held against what was got.
#pragma once

#include <glint/plan/assessment.h>
#include <span>
#include <vector>

namespace glint {

/// The verdict on each requirement, and how far the pixels reach for each range requirement.
struct JudgedRequirements {
    std::vector<RequirementResult> results;
    std::vector<ReachSummary> reaches;
};

/// Judges every requirement of the design. `assessment` must hold everything but requirements, reaches and
/// findings. Errors: a requirement on an object that the scene does not have.
[[nodiscard]] JudgedRequirements judge_requirements(const Design& design, const Assessment& assessment,
                                                    const Link& link, std::span<const PixelLight> lights);

}  // namespace glint
