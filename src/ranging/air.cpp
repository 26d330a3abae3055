// Air: extinction by haze and fog, and the index that timing sees.
#include <glint/ranging/air.h>

#include <cmath>

namespace glint {
namespace {

double size_exponent(double kilometres) {
    if (kilometres > 50) return 1.6;
    if (kilometres > 6) return 1.3;
    if (kilometres > 1) return 0.16 * kilometres + 0.34;
    if (kilometres > 0.5) return kilometres - 0.5;
    return 0;
}

}  // namespace

double extinction(double visibility, double wavelength) {
    return 3.912 / visibility * std::pow(wavelength / 550e-9, -size_exponent(visibility / 1000));
}

double air_group_index(double wavelength) {
    const double s = 1e-12 / (wavelength * wavelength);  // 1/um^2
    const double a = 238.0185 - s, b = 57.362 - s;
    const double refraction = 0.05792105 / a + 0.00167917 / b;
    // dn/ds = A/a^2 + B/b^2 and ds/dlambda = -2 s / lambda, so -lambda dn/dlambda = 2 s dn/ds.
    return 1 + refraction + 2 * s * (0.05792105 / (a * a) + 0.00167917 / (b * b));
}

}  // namespace glint
