// Hazard distances of a round Gaussian beam.
#include <glint/core/constants.h>
#include <glint/safety/hazard_distance.h>
#include <glint/safety/limits.h>

#include <algorithm>
#include <cmath>

namespace glint {
namespace {

double limit_at(const ApertureBeam& beam, double subtense) {
    return class_limit(beam.laser_class, {beam.wavelength, beam.duration, subtense}).energy;
}

// Distance at which the share through the aperture has fallen to `limit`; 0 when it never was above.
double distance_for(const ApertureBeam& beam, double limit) {
    const double emission = beam.energy * beam.capture_gain;
    if (emission <= limit) return 0;
    // 1 - exp(-(D/d)^2) = limit/emission, solved for d; log1p keeps the digits of a small ratio.
    const double width = beam.aperture / std::sqrt(-std::log1p(-limit / emission));
    return std::max(0.0, (width - beam.exit_width) / beam.divergence);
}

// Last distance within (near, far] that may be above the limit, or 0. The emission at the near end over the
// limit at the far end bounds the ratio in between, because both fall with distance; a stretch whose bound
// fails is halved, the far half first, down to 1e-5 of the distance.
double last_above_limit(const ApertureBeam& beam, double near, double far) {
    const double emission = beam.energy * beam.capture_gain *
                            gaussian_share(beam.aperture, beam.exit_width + beam.divergence * near);
    if (emission <= limit_at(beam, std::min(beam.source_width / far, limit_subtenses.to))) return 0;
    if (far <= near * (1 + 1e-5)) return far;
    const double middle = std::sqrt(near * far);
    const double outer = last_above_limit(beam, middle, far);
    return outer > 0 ? outer : last_above_limit(beam, near, middle);
}

}  // namespace

double gaussian_share(double aperture, double width_63) {
    check_not_negative(aperture, "aperture");
    check_not_negative(width_63, "beam width");
    if (width_63 == 0) return 1;
    const double ratio = aperture / width_63;
    return -std::expm1(-ratio * ratio);
}

double width_63_of_gaussian(double width_86) { return width_86 / std::sqrt(2.0); }

double exposure_limit(double emission_limit, double aperture) {
    check_not_negative(emission_limit, "emission limit");
    check_positive(aperture, "aperture");
    return emission_limit / (pi / 4 * aperture * aperture);
}

HazardDistance hazard_distance(const HazardBeam& beam) {
    check_not_negative(beam.emission, "emission");
    check_positive(beam.exposure_limit, "exposure limit");
    check_not_negative(beam.exit_width, "beam width at the exit");
    check_positive(beam.divergence, "divergence");
    const double width = std::sqrt(4 * beam.emission / (pi * beam.exposure_limit));
    if (width <= beam.exit_width) return {};
    const double a = beam.exit_width;
    return {.linear = (width - a) / beam.divergence,
            .quadrature = std::sqrt((width - a) * (width + a)) / beam.divergence};
}

double hazard_distance_through_aperture(const ApertureBeam& beam) {
    check_not_negative(beam.energy, "emission");
    check_not_negative(beam.exit_width, "beam width at the exit");
    check_positive(beam.divergence, "divergence");
    check_not_negative(beam.source_width, "width of the source");
    check_positive(beam.aperture, "aperture");
    check_not_negative(beam.capture_gain, "capture gain");

    // Beyond this the source is a point and the limit no longer falls: one closed form, exact.
    const double point_from = beam.source_width / alpha_min;
    const double as_point = distance_for(beam, limit_at(beam, 0));
    if (as_point >= point_from) return as_point;

    // From 100 mrad on, the largest subtense any factor knows, the limit is constant again.
    const double large_below = beam.source_width / 100e-3;
    const double as_extended = last_above_limit(beam, large_below, point_from);
    if (as_extended > 0) return as_extended;
    return std::min(large_below, distance_for(beam, limit_at(beam, limit_subtenses.to)));
}

}  // namespace glint
