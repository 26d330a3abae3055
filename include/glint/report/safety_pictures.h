// Pictures that explain the verdict on eye safety.
#pragma once

#include <glint/report/canvas.h>
#include <glint/safety/verdict.h>

namespace glint {

/// The retinal image of the governing case: energy per solid angle, with the part that governs outlined.
[[nodiscard]] Canvas retinal_image_picture(const Design& design, const SafetyVerdict& verdict);

/// Emission of the governing part and its limit over the duration of the emission.
[[nodiscard]] Canvas emission_limits_picture(const Design& design, const SafetyVerdict& verdict);

/// AE/AEL over the field of view, at the distance and focus that govern.
[[nodiscard]] Canvas safety_map_picture(const Design& design, const SafetyVerdict& verdict);

}  // namespace glint
