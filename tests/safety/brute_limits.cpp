// Limits and factors of Class 1, retinal thermal, written a second time from the printed tables.
//
// Sources as in docs/safety.md: IEC 60825-1:2014 Tables 3, 4 and 9 and 4.3 f), from memory where that page
// says so.
#include "brute_limits.h"

#include <algorithm>
#include <cmath>

namespace glint::test {
namespace {

constexpr double mrad = 1e-3;

// t^0.75, much faster than std::pow.
double power_075(double t) { return std::sqrt(t) * std::sqrt(std::sqrt(t)); }

}  // namespace

double brute_Ti(double wavelength) { return wavelength < 1050e-9 ? 5e-6 : 13e-6; }

double brute_T2(double subtense) {
    return 10 * std::pow(10.0, (std::clamp(subtense / mrad, 1.5, 100.0) - 1.5) / 98.5);
}

double brute_alpha_max(double duration) { return std::clamp(200 * std::sqrt(duration), 5.0, 100.0) * mrad; }

double brute_shortest(double side) {
    if (side <= 5 * mrad * (1 + equal_share)) return 0;
    const double root = side * (1 - equal_share) / (200 * mrad);
    return root * root;
}

double brute_C5(double wavelength, double pulse_width, double subtense, double N, double time_base) {
    const double falling = std::pow(N, -0.25);
    if (pulse_width <= brute_Ti(wavelength)) {
        if (time_base <= 0.25 || N <= 600) return 1;
        return std::clamp(5 * falling, 0.4, 1.0);
    }
    if (subtense <= 5 * mrad * (1 + equal_share) || subtense > 100 * mrad) return 1;
    if (subtense <= brute_alpha_max(pulse_width)) return N <= 40 ? falling : 0.4;
    return N <= 625 ? falling : 0.2;
}

BruteCells brute_cells(double wavelength) {
    const double nm = wavelength * 1e9;
    // The printed power of ten passes 5 half a nanometre before 1050 nm; never more than the 5 from there on.
    const double C4 = nm < 700 ? 1 : std::min(5.0, std::pow(10.0, 0.002 * (nm - 700)));
    const double C7 = nm < 1150   ? 1
                      : nm < 1200 ? std::pow(10.0, 0.018 * (nm - 1150))
                                  : 8 + std::pow(10.0, 0.04 * (nm - 1250));
    const double watt = 3.9e-4 * C4 * C7;
    if (nm < 1050) return {brute_Ti(wavelength), 7.7e-8 * C4, 7e-4 * C4, watt};
    return {brute_Ti(wavelength), 7.7e-7 * C7, 3.5e-3 * C7, watt};
}

double brute_limit(const BruteCells& cells, double t, double subtense) {
    const double C6 = std::max(1.0, subtense / smallest_side);
    if (t < cells.Ti * (1 - equal_share)) return cells.flat * C6;
    const double rising = cells.rising * power_075(t) * C6;
    // Where cells meet both hold.
    if (t <= cells.Ti * (1 + equal_share)) return std::min(cells.flat * C6, rising);
    if (t < 10 * (1 - equal_share)) return rising;
    if (subtense <= smallest_side * (1 + equal_share))
        return t <= 10 * (1 + equal_share) ? std::min(rising, cells.watt * t) : cells.watt * t;
    const double T2 = brute_T2(subtense);
    return t <= T2 ? rising : cells.rising * C6 * t / std::sqrt(std::sqrt(T2));
}

}  // namespace glint::test
