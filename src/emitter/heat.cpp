// The heat of one emitter on its substrate: thermal resistance, coupling and transients in closed form.
#include <glint/core/constants.h>
#include <glint/core/quadrature.h>
#include <glint/emitter/heat.h>

#include <unsupported/Eigen/SpecialFunctions>

#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>

namespace glint {
namespace {

using Eigen::numext::bessel_i0e;
using Eigen::numext::bessel_i1e;
using Eigen::numext::bessel_k0;
using std::numbers::ln2;

// k a times the resistance of a disc on a half-space.
double disc_number(DiscRise rise) {
    switch (rise) {
        case DiscRise::isothermal:
            return 1.0 / 4;
        case DiscRise::mean:
            return 8 / (3 * pi * pi);
        case DiscRise::centre:
            return 1 / pi;
    }
    return 0;
}

// Resistance of a disc on a slab over that on a half-space. Small discs, a << h, see the images as points:
// 1 - x with x = ln 2 a/(2 pi q h), the next term being of third order. Wide ones conduct straight down,
// h/(k pi a^2), which is c/x with c = ln 2/(2 pi^2 q^2). The quotient of lowest degree with both limits; heat
// that spreads meets less than straight down.
double slab_share(double radius, double thickness, double disc_number) {
    const double x = ln2 * radius / (2 * pi * disc_number * thickness);
    const double c = ln2 / (2 * pi * pi * disc_number * disc_number);
    return std::min(c / x, (1 - c + c * x) / (1 - c + x + x * x));
}

// Share of the heat of a disc that is still inside its rim after spreading as a Gaussian, u = a^2/(2 alpha
// t): the integral of 2 J1(x)^2/x exp(-x^2/(2 u)) over x is 1 - exp(-u) (I0(u) + I1(u)).
double share_inside(double u) { return 1 - bessel_i0e(u) - bessel_i1e(u); }

}  // namespace

double disc_resistance(double diameter, double conductivity, DiscRise rise) {
    return disc_number(rise) / (conductivity * diameter / 2);
}

double self_resistance(double diameter, const Substrate& substrate, DiscRise rise) {
    const double half_space = disc_resistance(diameter, substrate.self_conductivity, rise);
    if (!substrate.thickness) return half_space;
    const double share = slab_share(diameter / 2, *substrate.thickness, disc_number(rise));
    // The far side lies in the substrate. Where that conducts worse than the way out of the emitter, taking
    // its full part off could leave less than nothing.
    const double conductivity = std::max(substrate.conductivity, substrate.self_conductivity);
    return half_space - (1 - share) * disc_resistance(diameter, conductivity, rise);
}

double slab_coupling_by_images(double distance, const Substrate& substrate) {
    // Alternating sum by Chebyshev polynomials (Cohen, Rodriguez Villegas, Zagier 2000, algorithm 1). The
    // terms are moments, 1/sqrt(r^2 + (2 n h)^2) = integral of exp(-2 n h s) J0(r s) ds, and |J0| <= 1, so
    // that the error is below 5.8^-terms/(2 h) at every distance.
    constexpr int terms = 22;
    const double root = std::pow(3 + std::sqrt(8.0), terms);
    const double divisor = (root + 1 / root) / 2;
    double factor = -1, weight = -divisor, sum = 0;
    for (int n = 0; n < terms; ++n) {
        weight = factor - weight;
        sum += weight / std::hypot(distance, 2 * (n + 1) * *substrate.thickness);
        factor *= (n + terms) * (n - terms) / ((n + 0.5) * (n + 1));
    }
    return (1 / distance - 2 * sum / divisor) / (2 * pi * substrate.conductivity);
}

double slab_coupling_by_modes(double distance, const Substrate& substrate) {
    const double thickness = *substrate.thickness;
    const double x = pi * distance / (2 * thickness);
    double sum = 0, term = 1;
    for (int m = 0; term > 1e-17 * sum; ++m) sum += term = bessel_k0((2 * m + 1) * x);
    return sum / (pi * substrate.conductivity * thickness);
}

double coupling(double distance, const Substrate& substrate) {
    if (!substrate.thickness) return 1 / (2 * pi * substrate.conductivity * distance);
    // From one thickness on the images cancel digits while the modes need no more than a dozen terms.
    return distance < *substrate.thickness ? slab_coupling_by_images(distance, substrate)
                                           : slab_coupling_by_modes(distance, substrate);
}

double centre_step(double diameter, const Substrate& substrate, double time) {
    if (time <= 0) return 0;
    const double radius = diameter / 2, length = std::sqrt(substrate.diffusivity * time);
    const double x = radius / (2 * length);
    // 1/sqrt(pi) - ierfc(x), written so that nothing cancels at long times.
    const double bracket = -std::expm1(-x * x) / std::sqrt(pi) + x * std::erfc(x);
    return 2 * length / (substrate.conductivity * pi * radius * radius) * bracket;
}

double mean_step(double diameter, const Substrate& substrate, double time) {
    if (time <= 0) return 0;
    // The derivative by time of the Bessel integral has a closed form. With s = sqrt(alpha t)/a it reads
    // dZ/ds = 2/(k pi^1.5 a) share_inside(1/(2 s^2)), smooth from s = 0. Past s = 1 the way that is still to
    // go to the steady mean is taken instead, over w = 1/s.
    const double radius = diameter / 2, s = std::sqrt(substrate.diffusivity * time) / radius;
    const double scale = 2 / (substrate.conductivity * std::pow(pi, 1.5) * radius);
    if (s <= 1) return scale * integral(0, s, 16, [](double x) { return share_inside(1 / (2 * x * x)); });
    // Near w = 0 the quotient is 1/4 - w^2/16; below 1e-3 the difference would lose more than that keeps.
    const auto rest = [](double w) { return w < 1e-3 ? 0.25 : share_inside(w * w / 2) / (w * w); };
    return disc_resistance(diameter, substrate.conductivity, DiscRise::mean) -
           scale * integral(0, 1 / s, 16, rest);
}

double junction_step(double diameter, const Substrate& substrate, double time, std::optional<double> steady) {
    const double limit = disc_resistance(diameter, substrate.conductivity, DiscRise::centre);
    const double bulk = centre_step(diameter, substrate, time);
    // p Z/(1 + Z (p/R - 1/Z_end)): p Z while Z is small, R when Z has reached its end, rising in between.
    const double factor = substrate.pulse_heating;
    return factor * bulk / (1 + bulk * (factor / steady.value_or(limit) - 1 / limit));
}

double pulse_rise(double diameter, const Substrate& substrate, double width, double time,
                  std::optional<double> steady) {
    return junction_step(diameter, substrate, time, steady) -
           junction_step(diameter, substrate, time - width, steady);
}

double pulse_train_peak(double diameter, const Substrate& substrate, double width, double period,
                        std::optional<double> steady) {
    const double duty = width / period;
    const double end = steady.value_or(disc_resistance(diameter, substrate.conductivity, DiscRise::centre));
    const auto step = [&](double time) { return junction_step(diameter, substrate, time, end); };
    return duty * end + (1 - duty) * step(period + width) + step(width) - step(period);
}

PulseBounds pulse_bounds(double diameter, double width) {
    const Substrate bulk, mirror{.conductivity = 3.5, .diffusivity = 2e-6};
    constexpr double layer = 1e-6;
    const double heat_capacity = bulk.conductivity / bulk.diffusivity * pi * diameter * diameter / 4 * layer;
    return {.bulk = centre_step(diameter, bulk, width),
            .mirror = centre_step(diameter, mirror, width),
            .layer = width / heat_capacity};
}

double point_step(const Substrate& substrate, double distance, double time) {
    if (time <= 0) return 0;
    return std::erfc(distance / diffusion_length(substrate.diffusivity, time)) /
           (2 * pi * substrate.conductivity * distance);
}

double point_impulse(const Substrate& substrate, double distance, double time) {
    if (time <= 0) return 0;
    const double volume_heat = substrate.conductivity / substrate.diffusivity;
    const double reach = substrate.diffusivity * time;
    return std::exp(-distance * distance / (4 * reach)) / (4 * volume_heat * std::pow(pi * reach, 1.5));
}

double rise_with_falling_conductivity(double rise, double sink_temperature) {
    constexpr double exponent = 1.3, reference = 300;
    const double rest =
        std::pow(sink_temperature, 1 - exponent) - (exponent - 1) * rise * std::pow(reference, -exponent);
    if (rest <= 0) return std::numeric_limits<double>::infinity();
    return std::pow(rest, 1 / (1 - exponent)) - sink_temperature;
}

double algaas_conductivity(double aluminium) {
    return 100 / (2.27 + 28.83 * aluminium - 30 * aluminium * aluminium);
}

double diffusion_length(double diffusivity, double time) { return std::sqrt(4 * diffusivity * time); }

double chip_time_constant(double thickness, double diffusivity) {
    const double length = 2 * thickness / pi;
    return length * length / diffusivity;
}

}  // namespace glint
