// Distance beyond which a beam is below the limit: closed forms and the form through an aperture.
#pragma once

#include <glint/safety/class.h>

namespace glint {

/// Share of a round Gaussian beam that passes a centred round aperture: 1 - exp(-(D/d63)^2), D and d63 in m.
/// `width_63` is the diameter that holds 63.2 % of the power; 0 gives 1. Throws Error below 0. Textbook
/// arithmetic.
[[nodiscard]] double gaussian_share(double aperture, double width_63);

/// d63 of a Gaussian from its 1/e2 diameter (or full angle), d86/sqrt(2). Textbook arithmetic.
[[nodiscard]] double width_63_of_gaussian(double width_86);

/// Exposure limit at the cornea [W/m2 or J/m2] that belongs to an emission limit [W or J]: limit/(pi/4 D^2),
/// D in m. Source: IEC 60825-1:2014 Annex A, from memory.
[[nodiscard]] double exposure_limit(double emission_limit, double aperture);

/// A round beam for the closed forms.
struct HazardBeam {
    double emission = 0;        ///< W, or J per pulse; not negative
    double exposure_limit = 0;  ///< W/m2, or J/m2; greater than 0
    double exit_width = 0;      ///< m, d63 at the exit; not negative
    double divergence = 0;      ///< rad, full angle at 63 %; greater than 0
};

/// The two closed forms in use [m]; 0 when the exit itself is below the limit.
struct HazardDistance {
    double linear = 0;      ///< [sqrt(4 P/(pi E)) - a]/phi; source: a public guidance page
    double quadrature = 0;  ///< sqrt(4 P/(pi E) - a^2)/phi; source: ANSI practice, from memory
    /// The one to use.
    [[nodiscard]] double larger() const { return linear > quadrature ? linear : quadrature; }
};

/// Nominal ocular hazard distance by both closed forms. They take the on-axis irradiance for the whole
/// aperture, which is on the safe side near the exit. Throws Error for values out of range.
[[nodiscard]] HazardDistance hazard_distance(const HazardBeam& beam);

/// A round Gaussian beam from a source of given size, for the numeric form.
struct ApertureBeam {
    double wavelength = 0;    ///< m, 400 nm to 1800 nm
    double duration = 0;      ///< s, of the emission that is tested
    double energy = 0;        ///< J in that duration; not negative
    double exit_width = 0;    ///< m, d63 at the exit; not negative
    double divergence = 0;    ///< rad, full angle at 63 %; greater than 0
    double source_width = 0;  ///< m, d63 of the apparent source at the exit; 0 for a point
    double aperture = 7e-3;   ///< m; greater than 0
    double capture_gain = 1;  ///< factor an optical aid puts on the emission; not negative
    LaserClass laser_class = LaserClass::class_1;
};

/// Distance r [m] beyond which energy * gain * (1 - exp(-(D/d63(r))^2)) stays at or below
/// AEL(lambda, t, source/r), d63(r) = a + phi r; 0 when it does so everywhere. Exact for a point source,
/// at most 1e-5 of itself too long for an extended one. The 0.1 m or 2 m of the measurement condition is left
/// to the caller. Throws Error for values out of range.
[[nodiscard]] double hazard_distance_through_aperture(const ApertureBeam& beam);

}  // namespace glint
