// One design worked through from the emitter to the verdict.
#pragma once

#include <glint/plan/assessment.h>

namespace glint {

/// Works a design through: array, firing plan, beams, scene, returns, points, safety, requirements. The one
/// place that shows the order. Errors carry file and line of the field to change. Throws Stopped when asked
/// to stop.
[[nodiscard]] Assessment assess(const LoadedDesign& loaded, const Progress& progress = {});

/// Eye safety alone; needs no scene. Same errors.
[[nodiscard]] SafetyVerdict assess_safety(const LoadedDesign& loaded, const Progress& progress = {});

}  // namespace glint
