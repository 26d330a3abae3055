// Apertures and distances of the measurement conditions.
#include <glint/safety/aperture.h>
#include <glint/safety/domain.h>
#include <algorithm>
#include <cmath>

namespace glint {
namespace {

// In mm, t in s. Where two cells meet the larger aperture lets more light in.
double corneal_aperture(double duration) {
    double mm = 0;
    if (touches({limit_durations.from, 0.35}, duration)) mm = 1;
    if (touches({0.35, 10}, duration)) mm = std::max(mm, 1.5 * std::pow(duration, 3.0 / 8.0));
    if (touches({10, limit_durations.to}, duration)) mm = std::max(mm, 3.5);
    return mm * 1e-3;
}

}  // namespace

std::string_view name_of(Condition condition) {
    return condition == Condition::telescope ? "Condition 1 (telescope)" : "Condition 3 (naked eye)";
}

MeasurementCondition measurement(Condition condition, double wavelength, double duration) {
    check_wavelength(wavelength);
    check_duration(duration);
    const bool retinal = touches(retinal_wavelengths, wavelength);
    if (condition == Condition::naked_eye)
        return {.aperture = retinal ? 7e-3 : corneal_aperture(duration), .distance = 0.1};
    return {.aperture = retinal ? 50e-3 : telescope_magnification * corneal_aperture(duration),
            .distance = 2};
}

}  // namespace glint
