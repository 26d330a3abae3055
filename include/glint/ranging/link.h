// The link budget: how much of the light that lands on a surface comes back into a pupil.
#pragma once

#include <glint/core/constants.h>

namespace glint {

/// Intensity per landed power of a Lambertian surface under an angle [1/sr]: rho cos / pi.
[[nodiscard]] constexpr double lambertian(double reflectance, double cosine) {
    return reflectance * cosine / pi;
}

/// Energy that reaches a detector from a patch: landed energy [J] times the surface's intensity per landed
/// power towards the receiver [1/sr] times the solid angle of the pupil (area, foreshortened, over squared
/// distance) times the transmission on the way. Lambertian, normal: E rho D^2 / (4 R^2) (standard lidar
/// equation).
[[nodiscard]] constexpr double returned_energy(double landed, double per_steradian, double pupil_area,
                                               double distance, double transmission) {
    return landed * per_steradian * pupil_area / (distance * distance) * transmission;
}

/// Energy that a pixel collects from a surface that fills it: radiant exposure of the surface [J/m2] times
/// its intensity per landed power and cosine, rho / pi for a Lambertian one [1/sr], times the pixel's solid
/// angle [sr], the pupil area [m2] and the transmission. The distance drops out: the patch grows as its
/// return falls.
[[nodiscard]] constexpr double extended_energy(double exposure, double radiance_factor, double solid_angle,
                                               double pupil_area, double transmission) {
    return exposure * radiance_factor * solid_angle * pupil_area * transmission;
}

}  // namespace glint
