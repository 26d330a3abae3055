// The factor formulas, each in the units the standard writes them in.
#include <glint/safety/factors.h>

#include <algorithm>
#include <cmath>

namespace glint {

double c3(double wavelength) {
    check_photochemical_wavelength(wavelength);
    const double nm = wavelength * 1e9;
    return nm <= 450 ? 1 : std::pow(10.0, 0.02 * (nm - 450));
}

double c4(double wavelength) {
    check_retinal_wavelength(wavelength);
    const double nm = wavelength * 1e9;
    // 10^(0.002 * 350) = 5.012 at 1050 nm, so the cap only ever acts where the two bands meet.
    return nm <= 700 ? 1 : std::min(5.0, std::pow(10.0, 0.002 * (nm - 700)));
}

double alpha_max(double duration) {
    check_duration(duration);
    const double mrad = duration < 625e-6 ? 5 : duration < 0.25 ? 200 * std::sqrt(duration) : 100;
    return mrad * 1e-3;
}

double c6(double subtense, double duration) {
    check_subtense(subtense);
    const double largest = alpha_max(duration);
    return std::clamp(subtense, alpha_min, largest) / alpha_min;
}

double c7(double wavelength) {
    check_retinal_wavelength(wavelength);
    const double nm = wavelength * 1e9;
    if (nm <= 1150) return 1;
    // The two formulas give 7.943 and 8.010 at 1200 nm; touches() keeps a rounded 1200 nm on the smaller one.
    if (touches({1150e-9, 1200e-9}, wavelength)) return std::pow(10.0, 0.018 * (nm - 1150));
    return 8 + std::pow(10.0, 0.04 * (nm - 1250));
}

double t2(double subtense) {
    check_subtense(subtense);
    const double mrad = std::clamp(subtense * 1e3, 1.5, 100.0);
    return 10 * std::pow(10.0, (mrad - 1.5) / 98.5);
}

double grouping_time(double wavelength) {
    check_wavelength(wavelength);
    // From the longest down, so that a wavelength where two bands meet gets the longer time.
    if (touches({1500e-9, 1800e-9}, wavelength)) return 10;
    if (touches({1400e-9, 1500e-9}, wavelength)) return 1e-3;
    if (touches({1050e-9, 1400e-9}, wavelength)) return 13e-6;
    return 5e-6;
}

double time_base(double wavelength, LaserClass laser_class, bool long_viewing) {
    check_wavelength(wavelength);
    if (long_viewing) return long_viewing_time_base;
    const bool looks_away = laser_class == LaserClass::class_2 || laser_class == LaserClass::class_2M ||
                            laser_class == LaserClass::class_3R;
    return looks_away && !touches({700e-9, 1800e-9}, wavelength) ? aversion_time_base : usual_time_base;
}

double thermal_acceptance_angle(double duration) { return alpha_max(duration); }

double photochemical_acceptance_angle(double duration) {
    check_duration(duration);
    const double mrad = duration <= 100 ? 11 : duration < 1e4 ? 1.1 * std::sqrt(duration) : 110;
    return mrad * 1e-3;
}

}  // namespace glint
