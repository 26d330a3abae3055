// Heat of one emitter: closed forms against published values, direct integrals and sums of pulses.
#include <glint/core/constants.h>
#include <glint/core/quadrature.h>
#include <glint/core/samples.h>
#include <glint/emitter/heat.h>

#include "about.h"

#include <doctest/doctest.h>
#include <algorithm>
#include <cmath>
#include <numbers>
#include <unsupported/Eigen/SpecialFunctions>

using namespace glint;

namespace {

using Eigen::numext::bessel_j1;

const Substrate bulk;
const Substrate chip{.thickness = 100e-6};
// What the derived transients take: 1.75461e6 J/(m3 K), so that alpha is 6e-4 more than the default.
const Substrate exact{.diffusivity = 46 / 1.75461e6};

// Rounded in the last digit that is given: half of it over the value.
double last_digit(double value, double digit) { return digit / 2 / value * 1.001; }

// Mean or centre of a disc of radius 1 with an even flux on a slab of thickness h, k = 1 [as R k a]: the
// integrals of J1^2 tanh/x^2 and of J1 tanh/x (Carslaw and Jaeger), the latter less its half-space value 1.
double slab_mean(double h) {
    const auto f = [&](double x) { return std::pow(bessel_j1(x) / x, 2) * std::tanh(x * h); };
    // Past 400 J1^2 is 1/(pi x) on average: 1/(2 pi 400^2) is left.
    return 2 / pi * (integral(0, 400, 2000, f) + 1 / (2 * pi * 400 * 400));
}
double slab_centre(double h) {
    const auto f = [&](double x) { return bessel_j1(x) / x * (1 - std::tanh(x * h)); };
    return (1 - integral(0, 20 / h, 2000, f)) / pi;
}

}  // namespace

TEST_CASE("the resistance of a disc on a half-space is that of the textbooks") {
    // 1/4, 8/(3 pi^2), 1/pi (Carslaw and Jaeger; derived to six digits).
    CHECK(disc_resistance(2, 1, DiscRise::isothermal) == 0.25);
    CHECK(disc_resistance(2, 1, DiscRise::mean) == about(0.270190).epsilon(last_digit(0.27, 1e-6)));
    CHECK(disc_resistance(2, 1, DiscRise::centre) == about(0.318310).epsilon(last_digit(0.32, 1e-6)));
    // Diameter in um; isothermal, mean, centre at k = 46; isothermal at k = 25.5 W/(m K). Derived.
    const double rows[][5] = {{4, 2717, 2937, 3460, 4902}, {6, 1812, 1958, 2307, 3268},
                              {8, 1359, 1468, 1730, 2451}, {10, 1087, 1175, 1384, 1961},
                              {12, 906, 979, 1153, 1634},  {15, 725, 783, 923, 1307},
                              {20, 543, 587, 692, 980}};
    for (const auto& row : rows) {
        CAPTURE(row[0]);
        const double d = row[0] * 1e-6;
        CHECK(std::abs(disc_resistance(d, 46) - row[1]) < 0.51);
        CHECK(std::abs(disc_resistance(d, 46, DiscRise::mean) - row[2]) < 0.51);
        CHECK(std::abs(disc_resistance(d, 46, DiscRise::centre) - row[3]) < 0.51);
        CHECK(std::abs(self_resistance(d, bulk) - row[4]) < 0.51);
    }
}

TEST_CASE("the default self resistance meets a measured one") {
    // 8 um oxide aperture: 2800 K/W measured (MacDougal et al. 1998). The same paper's size series gives the
    // conductivity, and its scatter is that large.
    CHECK(self_resistance(8e-6, bulk) == about(2451).epsilon(last_digit(2451, 1)));
    CHECK(self_resistance(8e-6, bulk) == about(2800).epsilon(0.15));
}

TEST_CASE("a cold far side takes ln 2/(2 pi k h) off small discs") {
    // 24.0 K/W at 100 um (derived). The next term is of third order in a/h, (a/h)^2 of this one.
    CHECK(self_resistance(2e-6, bulk) - self_resistance(2e-6, chip) == about(23.98).epsilon(5e-4));
    // 40 % lower on 10 um than on 200 um (Choi et al. 2006): 22, 33, 40 and 44 % for 10 to 20 um by the first
    // order alone, with one conductivity throughout. The finer form stays within 8 points of that.
    const double expected[][2] = {{10e-6, 0.22}, {15e-6, 0.33}, {18e-6, 0.40}, {20e-6, 0.44}};
    for (const auto& [d, share] : expected) {
        const Substrate thin{.thickness = 10e-6, .self_conductivity = 46};
        CHECK(std::abs(1 - self_resistance(d, thin) / disc_resistance(d, 46) - share) < 0.08);
    }
}

TEST_CASE("the self resistance on a slab follows the integral for an even flux") {
    for (const double h : {0.05, 0.1, 0.2, 0.4, 0.7, 1.0, 1.5, 2.0, 3.0, 5.0, 10.0}) {
        CAPTURE(h);
        const Substrate slab{.conductivity = 1, .thickness = h, .self_conductivity = 1};
        const double near = h >= 1 ? 0.03 : 0.07;  // as documented
        CHECK(self_resistance(2, slab, DiscRise::mean) == about(slab_mean(h)).epsilon(near));
        CHECK(self_resistance(2, slab, DiscRise::centre) == about(slab_centre(h)).epsilon(near));
    }
}

TEST_CASE("the self resistance is positive, and less on a thinner slab") {
    for (const DiscRise rise : {DiscRise::isothermal, DiscRise::mean, DiscRise::centre})
        for (const double self : {20.0, 46.0, 80.0})
            for (double d = 1e-6; d < 1e-2; d *= 1.7) {
                CAPTURE(d);
                CAPTURE(self);
                double last = self_resistance(d, {.self_conductivity = self}, rise);
                for (double h = 1e-3; h > 1e-6; h /= 1.7) {
                    const double now = self_resistance(d, {.thickness = h, .self_conductivity = self}, rise);
                    CHECK(now > 0);
                    CHECK(now < last);
                    last = now;
                }
            }
}

TEST_CASE("the coupling is that of the tables") {
    // Distance in um; half-space, 100 um slab; k = 46. Derived.
    const double rows[][3] = {{20, 172.99, 149.17},
                              {40, 86.497, 63.120},
                              {100, 34.599, 13.865},
                              {200, 17.299, 2.0442},
                              {400, 8.650, 0.0634}};
    for (const auto& row : rows) {
        CAPTURE(row[0]);
        // Five digits; four of the half-space and three of the slab in the last row.
        CHECK(coupling(row[0] * 1e-6, bulk) == about(row[1]).epsilon(6e-5));
        CHECK(coupling(row[0] * 1e-6, chip) == about(row[2]).epsilon(row[0] == 400 ? 8e-4 : 4e-5));
    }
    CHECK(coupling(40e-6, chip) == about(63.1195).epsilon(last_digit(63, 1e-4)));  // derived
    CHECK(coupling(40e-6, bulk) == about(86.4973).epsilon(last_digit(86, 1e-4)));  // derived
    CHECK(coupling(20e-6, chip) / coupling(20e-6, bulk) == about(0.8623).epsilon(1e-4));
}

TEST_CASE("both series of the slab's coupling agree, and both agree with the plain sum of images") {
    for (double share = 0.02; share < 4; share *= 1.3) {
        CAPTURE(share);
        const double r = share * 100e-6;
        const double images = slab_coupling_by_images(r, chip), modes = slab_coupling_by_modes(r, chip);
        // The images cancel to 1e-16 of 1/(k h), of which exp(-pi r/(2 h)) is left.
        CHECK(images == about(modes).epsilon(1e-13 + 1e-15 * std::exp(pi / 2 * share)));
        // The mean of the last two of N partial sums is off by about the fourth part of the change of the
        // last term, 1/(4 N^2) in 1/(2 h) here.
        double sum = 1 / r, last = 0;
        constexpr int terms = 20000;
        for (int n = 1; n <= terms; ++n) sum += last = (n % 2 == 0 ? 2 : -2) / std::hypot(r, 2 * n * 100e-6);
        const double plain = (sum - last / 2) / (2 * pi * 46);
        CHECK(std::abs(plain - modes) < 1 / (2 * pi * 46 * 100e-6) / (2.0 * terms * terms));
    }
}

TEST_CASE("the coupling falls with the distance without a step where the series change") {
    double last = coupling(1e-6, chip);
    for (double r = 1.01e-6; r < 2e-3; r *= 1.01) {
        const double now = coupling(r, chip);
        CHECK(now < last);
        CHECK(now < coupling(r, bulk));
        last = now;
    }
    CHECK(coupling(99.9999999e-6, chip) == about(coupling(100e-6, chip)).epsilon(1e-8));
    CHECK(coupling(1, chip) == 0);  // exp(-15 708) is below the smallest double
}

TEST_CASE("the centre of a disc warms as tabulated") {
    // 10 um, k = 46, alpha = 2.62e-5; time, K/W. Derived; rounded to 0.01.
    const double rows[][2] = {{1e-9, 50.57},   {3e-9, 87.59},   {1e-8, 159.92},  {3e-8, 276.98},
                              {1e-7, 499.21},  {3e-7, 767.29},  {1e-6, 1017.17}, {3e-6, 1166.72},
                              {1e-5, 1263.87}, {1e-4, 1345.85}, {1e-3, 1371.90}};
    for (const auto& [time, rise] : rows) {
        CAPTURE(time);
        CHECK(centre_step(10e-6, exact, time) == about(rise).epsilon(last_digit(rise, 0.01)));
        CHECK(centre_step(10e-6, bulk, time) == about(rise).epsilon(5e-4));  // sqrt(alpha) at most
    }
    CHECK(centre_step(10e-6, exact, 100e-9) == about(499.21).epsilon(last_digit(499, 0.01)));
    CHECK(centre_step(10e-6, exact, 3e-9) == about(87.59).epsilon(last_digit(87, 0.01)));
    CHECK(centre_step(10e-6, bulk, 1e6) == about(1384.0).epsilon(last_digit(1384, 0.1)));
    CHECK(centre_step(10e-6, bulk, 0) == 0);
    CHECK(centre_step(10e-6, bulk, -1) == 0);
}

TEST_CASE("the centre of a disc takes the textbook's time for each share of its rise") {
    // In a^2/alpha: 50, 63.2, 90 and 95 % (derived, three digits). The rise is at most half as steep as the
    // time in relative terms.
    const double rows[][2] = {{0.231, 0.5}, {0.502, 0.632}, {7.87, 0.9}, {31.7, 0.95}};
    for (const auto& [time, share] : rows)
        CHECK(centre_step(10e-6, bulk, time * 25e-12 / 2.62e-5) /
                  disc_resistance(10e-6, 46, DiscRise::centre) ==
              about(share).epsilon(2e-3));
    // 35 ns, 77 ns and 1.20 us for a 4 um disc (derived).
    CHECK(centre_step(4e-6, bulk, 35e-9) / disc_resistance(4e-6, 46, DiscRise::centre) ==
          about(0.5).epsilon(0.01));
    CHECK(centre_step(4e-6, bulk, 1.2e-6) / disc_resistance(4e-6, 46, DiscRise::centre) ==
          about(0.9).epsilon(1e-3));
}

TEST_CASE("the mean of a disc follows the Bessel integral") {
    // 414.5 K/W after 100 ns, 1174.7 in the end (derived).
    CHECK(mean_step(10e-6, bulk, 100e-9) == about(414.5).epsilon(last_digit(414, 0.1)));
    CHECK(mean_step(10e-6, bulk, 1e6) == about(1174.7).epsilon(last_digit(1174, 0.1)));
    CHECK(mean_step(10e-6, bulk, 0) == 0);
    for (const double s : {0.01, 0.03, 0.1, 0.3, 0.7, 0.99, 1.01, 2.0, 5.0, 20.0, 100.0}) {
        CAPTURE(s);
        const auto f = [&](double x) { return std::pow(bessel_j1(x) / x, 2) * std::erf(x * s); };
        // Past 1000 J1^2 is 1/(pi x) on average and the rest 1/(2 pi 1e6), to about 1/1000 of itself.
        const double direct =
            2 / pi * (integral(0, 1, 5000, f) + integral(1, 1000, 20000, f) + 1 / (2 * pi * 1e6));
        const double time = s * s * 25e-12 / 2.62e-5;
        CHECK(std::abs(mean_step(10e-6, bulk, time) * 46 * 5e-6 - direct) < 2e-10);
    }
}

TEST_CASE("a junction warms as the bulk at first and to its own resistance in the end") {
    for (const double d : {4e-6, 10e-6, 20e-6})
        for (const double factor : {1.0 / 3, 1.0, 3.0}) {
            CAPTURE(d);
            CAPTURE(factor);
            const Substrate s{.pulse_heating = factor};
            const double end = self_resistance(d, s);
            // After 10 fs the bend is of the order of 3 Z/R, below 1e-3 here.
            CHECK(junction_step(d, s, 1e-14, end) == about(factor * centre_step(d, s, 1e-14)).epsilon(1e-3));
            CHECK(junction_step(d, s, 1e3, end) == about(end).epsilon(1e-4));
            for (double t = 1e-10, last = 0; t < 1; t *= 1.5) {
                const double now = junction_step(d, s, t, end);
                CHECK(now > last);
                CHECK(now < end);
                last = now;
            }
        }
    for (double t = 1e-10; t < 1; t *= 3)
        CHECK(junction_step(10e-6, bulk, t) == about(centre_step(10e-6, bulk, t)).epsilon(1e-12));
}

TEST_CASE("the bounds on heating by short pulses are those of the table") {
    // 10 um; width; bulk, mirror, layer [K/W]. Derived, three digits.
    const double rows[][4] = {
        {1e-9, 50.6, 183, 7.3}, {3e-9, 87.6, 317, 21.8}, {10e-9, 160, 579, 72.6}, {100e-9, 499, 1831, 726}};
    for (const auto& row : rows) {
        CAPTURE(row[0]);
        const PulseBounds bounds = pulse_bounds(10e-6, row[0]);
        CHECK(bounds.bulk == about(row[1]).epsilon(1e-3));
        CHECK(bounds.mirror == about(row[2]).epsilon(4e-3));
        CHECK(bounds.layer == about(row[3]).epsilon(8e-3));
    }
}

TEST_CASE("a pulse train peaks where the sum over its pulses does") {
    // 10 um; width and period; formula and sum over pulses [K/W]. Derived, four digits.
    CHECK(pulse_train_peak(10e-6, exact, 3e-9, 1e-6) == about(89.20).epsilon(2e-4));
    CHECK(pulse_train_peak(10e-6, exact, 100e-9, 1e-6) == about(550.2).epsilon(2e-4));
    const auto summed = [](double d, const Substrate& s, double width, double period, double end) {
        // Pulses of the last 4000 periods one by one; those before as their mean heat. Its error is that of
        // the midpoint rule, far below 1e-6.
        double sum = 0;
        constexpr int pulses = 4000;
        for (int n = pulses - 1; n >= 0; --n) sum += pulse_rise(d, s, width, n * period + width, end);
        const double middle = (pulses - 0.5) * period + width / 2;
        return sum + width / period * (end - junction_step(d, s, middle, end));
    };
    const double limit = disc_resistance(10e-6, 46, DiscRise::centre);
    CHECK(summed(10e-6, exact, 3e-9, 1e-6, limit) == about(89.00).epsilon(2e-4));
    CHECK(summed(10e-6, exact, 100e-9, 1e-6, limit) == about(544.6).epsilon(2e-4));

    RandomStream random(11);
    for (int trial = 0; trial < 200; ++trial) {
        const double d = 3e-6 * std::pow(7, random.uniform());
        const Substrate s{.thickness = 100e-6, .pulse_heating = std::pow(3, 2 * random.uniform() - 1)};
        const double period = 1e-7 * std::pow(1e4, random.uniform());
        const double width = period * std::pow(1e-4, random.uniform());
        const double end = trial % 2 == 0 ? self_resistance(d, s) : disc_resistance(d, 46, DiscRise::centre);
        CAPTURE(d);
        CAPTURE(period);
        CAPTURE(width);
        const double peak = pulse_train_peak(d, s, width, period, end);
        const double sum = summed(d, s, width, period, end);
        const double bound =
            width / period *
            (junction_step(d, s, 2 * period, end) - junction_step(d, s, period + width, end));
        CHECK(peak >= sum * (1 - 1e-6));
        CHECK(peak - sum <= bound + 1e-6 * sum);
    }
    // A train without gaps is steady heat.
    CHECK(pulse_train_peak(10e-6, bulk, 1e-6, 1e-6, 1961) == about(1961).epsilon(1e-12));
}

TEST_CASE("a pulse ends with the step and fades after it") {
    CHECK(pulse_rise(10e-6, bulk, 1e-7, 1e-7) == junction_step(10e-6, bulk, 1e-7));
    CHECK(pulse_rise(10e-6, bulk, 1e-7, 2e-7) < pulse_rise(10e-6, bulk, 1e-7, 1e-7));
    // Long after, the disc is a point that let out its heat at once, at the middle of the pulse; the disc's
    // size counts as a^2/(4 alpha t), 2e-5 here.
    const double t = 1e-2;
    CHECK(pulse_rise(10e-6, bulk, 1e-7, t + 5e-8) ==
          about(1e-7 * point_impulse(bulk, 1e-9, t)).epsilon(1e-4));
}

TEST_CASE("a point lets heat arrive when and as high as derived") {
    // 1 nJ; distance, peak and its time (derived, three digits).
    const double rows[][3] = {
        {20e-6, 10.5e-3, 2.54e-6}, {40e-6, 1.31e-3, 10.2e-6}, {80e-6, 0.164e-3, 40.7e-6}};
    for (const auto& [r, rise, time] : rows) {
        CHECK(1e-9 * point_impulse(bulk, r, time) == about(rise).epsilon(4e-3));
        CHECK(point_impulse(bulk, r, time) > point_impulse(bulk, r, 0.95 * time));
        CHECK(point_impulse(bulk, r, time) > point_impulse(bulk, r, 1.05 * time));
    }
    CHECK(1e-9 * point_impulse(exact, 40e-6, 10.17e-6) == about(1.311e-3).epsilon(last_digit(1.311, 1e-3)));
    // Share of the steady rise at 40 um (derived).
    const double shares[][2] = {{10e-6, 0.081}, {100e-6, 0.581}, {1e-3, 0.861}};
    for (const auto& [time, share] : shares)
        CHECK(point_step(bulk, 40e-6, time) / coupling(40e-6, bulk) == about(share).epsilon(7e-3));
    CHECK(point_step(bulk, 40e-6, 1e-6) / coupling(40e-6, bulk) < 1e-6);
    CHECK(point_step(bulk, 40e-6, 0) == 0);
    CHECK(point_impulse(bulk, 40e-6, 0) == 0);
}

TEST_CASE("impulses add up to the step") {
    for (const double t : {3e-6, 1e-5, 1e-4}) {
        const double sum = integral(0, t, 2000, [](double s) { return point_impulse(bulk, 40e-6, s); });
        CHECK(sum == about(point_step(bulk, 40e-6, t)).epsilon(1e-8));
    }
}

TEST_CASE("an explicit simulation of the half-space warms like the closed form") {
    // Finite volumes in r and z around a disc of radius 1, k = alpha = 1, with even flux on top. Cells of
    // 1/12 put the centre of the first half a cell below the surface: the rise there is less by the flux
    // times half a cell, which is put back. What is left is the discretisation, of second order: below 2 %.
    constexpr int cells = 72;  // to 6 radii: heat does not come back from there within t = 1
    constexpr double w = 1.0 / 12, dt = 0.15 * w * w;
    std::vector<double> now(cells * cells, 0.0), next(cells * cells, 0.0);
    const auto at = [&](int r, int z) { return now[z * cells + r]; };
    double t = 0;
    const auto advance_to = [&](double end) {
        for (; t < end; t += dt) {
            for (int z = 0; z < cells; ++z)
                for (int r = 0; r < cells; ++r) {
                    const double inner = r * w, outer = (r + 1) * w,
                                 area = (outer * outer - inner * inner) / 2;
                    double flow = 0;  // into the cell, per radian
                    if (r > 0) flow += inner * (at(r - 1, z) - at(r, z));
                    if (r + 1 < cells) flow += outer * (at(r + 1, z) - at(r, z));
                    if (z > 0) flow += area / w * (at(r, z - 1) - at(r, z));
                    if (z + 1 < cells) flow += area / w * (at(r, z + 1) - at(r, z));
                    if (z == 0 && outer < 1 + w / 2) flow += area / pi;  // 1 W over the disc
                    next[z * cells + r] = at(r, z) + dt * flow / (area * w);
                }
            std::swap(now, next);
        }
    };
    const Substrate unit{.conductivity = 1, .diffusivity = 1};
    for (const double end : {0.1, 0.3, 1.0}) {
        CAPTURE(end);
        advance_to(end);
        double mean = 0;
        for (int r = 0; r < 12; ++r) mean += at(r, 0) * (2 * r + 1) / 144;
        const double skin = w / 2 / pi;
        CHECK(at(0, 0) + skin == about(centre_step(2, unit, t)).epsilon(0.02));
        CHECK(mean + skin == about(mean_step(2, unit, t)).epsilon(0.02));
    }
}

TEST_CASE("falling conductivity raises the rise") {
    // Sink at 298.15 K: 30 K become 31.80 K, 75 K become 88.29 K (derived).
    CHECK(rise_with_falling_conductivity(30, 298.15) == about(31.80).epsilon(last_digit(31, 0.01)));
    CHECK(rise_with_falling_conductivity(75, 298.15) == about(88.29).epsilon(last_digit(88, 0.01)));
    CHECK(rise_with_falling_conductivity(0, 298.15) == about(1e-300).scale(1).epsilon(1e-10));
    CHECK(std::isinf(rise_with_falling_conductivity(2000, 298.15)));
    // The integral of k(T)/k(300 K) over the true rise is the rise with constant conductivity.
    const double hot = 350 + rise_with_falling_conductivity(60, 350);
    CHECK(integral(350, hot, 20, [](double T) { return std::pow(T / 300, -1.3); }) ==
          about(60).epsilon(1e-9));
}

TEST_CASE("material, spreading and time constants are those of their sources") {
    CHECK(algaas_conductivity(0) == about(44.05).epsilon(last_digit(44, 0.01)));  // Afromowitz 1973
    const double rows[][2] = {{0.12, 18.9}, {0.5, 10.9}, {0.9, 25.5}, {0.92, 29.4}, {1.0, 90.9}};
    for (const auto& [x, k] : rows) CHECK(std::abs(algaas_conductivity(x) - k) < 0.0501);
    // Garcia, Farzaneh 2016: 2e-6 m2/s, 9.7 us (derived from it).
    CHECK(diffusion_length(2e-6, 9.7e-6) == about(8.809e-6).epsilon(last_digit(8.809, 1e-3)));
    // 1, 3, 10 ns in the bulk: 0.32, 0.56, 1.02 um (derived).
    CHECK(diffusion_length(2.62e-5, 3e-9) == about(0.56e-6).epsilon(0.01));
    // Chips of 100, 150, 200 um: 0.155, 0.348, 0.618 ms (derived; three digits, 0.155 rounded up from
    // 0.1547).
    CHECK(chip_time_constant(100e-6, 2.62e-5) == about(0.155e-3).epsilon(4e-3));
    CHECK(chip_time_constant(150e-6, 2.62e-5) == about(0.348e-3).epsilon(2e-3));
    CHECK(chip_time_constant(200e-6, 2.62e-5) == about(0.618e-3).epsilon(2e-3));
}
