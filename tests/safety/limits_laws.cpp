// Laws the limits obey everywhere, on seeded random emissions.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/safety/aperture.h>
#include <glint/safety/limits.h>
#include "points.h"

#include <doctest/doctest.h>
#include <algorithm>
#include <array>
#include <optional>
#include <vector>

using namespace glint;
using namespace glint::test;

namespace {

constexpr int points = 100'000;

// Exposure limits at the cornea, J/m2 for the duration: ICNIRP 2013, from memory. Written out case by case
// with factors of their own, as an independent second form of the Class 1 tables. None below 1 ns beyond 1400
// nm.
std::optional<double> exposure_limit_2013(double nanometres, double t, double milliradians) {
    if (nanometres >= 1400) {
        if (t < 1e-9) return std::nullopt;
        if (t >= 10) return 1000 * t;
        if (nanometres >= 1500) return 1e4;
        return t < 1e-3 ? 1e3 : 5600 * std::pow(t, 0.25);
    }
    const double CA = nanometres < 700    ? 1
                      : nanometres < 1050 ? std::exp(0.002 * (nanometres - 700) * std::log(10))
                                          : 5;
    double CC = 1;
    if (nanometres > 1150) CC = std::exp(0.018 * (nanometres - 1150) * std::log(10));
    if (nanometres > 1200) CC = 8 + std::exp(0.04 * (nanometres - 1250) * std::log(10));
    const double largest = t < 625e-6 ? 5 : t < 0.25 ? 200 * std::sqrt(t) : 100;
    const double CE = std::max(1.5, std::min(milliradians, largest)) / 1.5;
    const double T2 = milliradians < 1.5   ? 10
                      : milliradians > 100 ? 100
                                           : std::pow(10, 1 + (milliradians - 1.5) / 98.5);
    const double step = nanometres < 1050 ? 5e-6 : 13e-6;
    if (t < 1e-11) return 1e-3 * CE * CC;
    if (t < step) return nanometres < 1050 ? 2e-3 * CA * CE : 2e-2 * CC * CE;
    if (t < 10) return 18 * std::pow(t, 0.75) * CA * CE * (nanometres < 1050 ? 1 : CC);
    if (milliradians <= 1.5) return 10 * CA * CC * t;
    return t < T2 ? 18 * std::pow(t, 0.75) * CA * CE * CC : 18 * CA * CE * CC * std::pow(T2, -0.25) * t;
}

// Where a printed limit falls as the duration passes `at`, and to which share of itself.
struct PrintedStep {
    Interval wavelength;
    double at;
    double to;
};

// Derived from the printed coefficients of IEC 60825-1:2014 Tables 3, 4 and 8 (from memory).
constexpr std::array class_1_steps{
    PrintedStep{{400e-9, 1050e-9}, 5e-6, 0.9612},    // 7.402e-8 / 7.7e-8
    PrintedStep{{1050e-9, 1400e-9}, 13e-6, 0.9839},  // 7.577e-7 / 7.7e-7
    PrintedStep{{400e-9, 1400e-9}, 10, 0.9907},      // 3.9e-4 / 3.936e-4, point source
    PrintedStep{{1400e-9, 1500e-9}, 1e-3, 0.9780},   // 7.824e-4 / 8e-4
    PrintedStep{{1500e-9, 1800e-9}, 10, 0.9878},     // 1.0e-2 / 1.012e-2
};

double largest_fall(double wavelength, double from, double to) {
    double share = 1 - 1e-12;
    for (const PrintedStep& step : class_1_steps)
        if (touches(step.wavelength, wavelength) && from <= step.at && step.at <= to) share *= step.to;
    return share;
}

}  // namespace

TEST_CASE("limits are exposure limits times the area of the aperture, all over the tables") {
    RandomStream random(11);
    for (int i = 0; i < points; ++i) {
        const EmissionWindow window = random_window(random);
        const std::optional<double> exposure =
            exposure_limit_2013(window.wavelength / nm, window.duration, window.subtense / mrad);
        if (!exposure) continue;
        const bool retinal = window.wavelength < 1400 * nm;
        const Mechanism mechanism = retinal ? Mechanism::retinal_thermal : Mechanism::corneal;
        const double limit = class_limit(LaserClass::class_1, window, mechanism)->energy;
        const double aperture =
            measurement(Condition::naked_eye, window.wavelength, window.duration).aperture;
        const double ratio = limit / (*exposure * pi / 4 * aperture * aperture);
        // Printed roundings run from -1.26 % (3.8e-8 below 10 ps) to +3.94 % (1.0e-2 W beyond 1400 nm).
        const bool good = ratio > 0.9874 && ratio < (retinal ? 1.0135 : 1.0395);
        if (!good)
            FAIL_CHECK("ratio ", ratio, " at ", window.wavelength, " m, ", window.duration, " s, ",
                       window.subtense, " rad");
    }
}

TEST_CASE("a limit never rises when the source shrinks") {
    RandomStream random(12);
    for (int i = 0; i < points; ++i) {
        const EmissionWindow large = random_window(random);
        EmissionWindow small = large;
        small.subtense *= i % 2 == 0 ? random.uniform() : 1 - 1e-3 * random.uniform();
        for (const LaserClass laser_class : {LaserClass::class_1, LaserClass::class_3R}) {
            const double less = class_limit(laser_class, small).energy;
            const double more = class_limit(laser_class, large).energy;
            if (less > more * (1 + 1e-12))
                FAIL_CHECK(name_of(laser_class), ": ", less, " above ", more, " at ", large.wavelength,
                           " m, ", large.duration, " s, ", large.subtense, " rad");
        }
    }
}

TEST_CASE("a limit in joule never falls with duration but for the printed steps") {
    RandomStream random(13);
    const auto energy = [](const EmissionWindow& window, Mechanism mechanism) {
        const std::optional<Limit> limit = class_limit(LaserClass::class_1, window, mechanism);
        return limit ? limit->energy : INFINITY;
    };
    for (int i = 0; i < points; ++i) {
        const EmissionWindow early = random_window(random);
        EmissionWindow late = early;
        late.duration = i % 2 == 0 ? decade_between(random, early.duration, 3e4)
                                   : early.duration * (1 + 0.1 * random.uniform());
        late.duration = std::min(late.duration, 3e4);
        for (const Mechanism mechanism : {Mechanism::retinal_thermal, Mechanism::corneal}) {
            const double before = energy(early, mechanism), after = energy(late, mechanism);
            if (std::isinf(before) && std::isinf(after)) continue;
            if (after < before * largest_fall(early.wavelength, early.duration, late.duration))
                FAIL_CHECK(before, " J falls to ", after, " J from ", early.duration, " s to ", late.duration,
                           " s at ", early.wavelength, " m, ", early.subtense, " rad");
        }
        // The photochemical limit sets in at 1 s or 10 s; once there it does not fall.
        const double before = energy(early, Mechanism::photochemical),
                     after = energy(late, Mechanism::photochemical);
        if (std::isfinite(before) && after < before * (1 - 1e-12))
            FAIL_CHECK("photochemical ", before, " J falls to ", after, " J");
        // The ceiling falls at 0.25 s only, from 0.03 C4 J or 0.15 J to 0.125 J.
        const double high = energy(early, Mechanism::ceiling), low = energy(late, Mechanism::ceiling);
        const bool passes = early.duration <= 0.25 && 0.25 <= late.duration;
        if (low < high * (passes ? 0.125 / 0.15 - 1e-12 : 1 - 1e-12))
            FAIL_CHECK("ceiling ", high, " J falls to ", low, " J");
    }
}

TEST_CASE("the classes are ordered: 1 below 3R below 3B") {
    RandomStream random(14);
    for (int i = 0; i < points; ++i) {
        const EmissionWindow window = random_window(random);
        const double lowest = class_limit(LaserClass::class_1, window).energy;
        const double middle = class_limit(LaserClass::class_3R, window).energy;
        const double highest = class_limit(LaserClass::class_3B, window).energy;
        if (!(lowest > 0 && lowest <= middle && middle <= highest && std::isfinite(highest)))
            FAIL_CHECK(lowest, " ", middle, " ", highest, " at ", window.wavelength, " m, ", window.duration,
                       " s");
        const double ratio = middle / lowest;
        // Five times, a little less by printed rounding; more only where Class 1 has the photochemical limit
        // or Class 2 sets the visible one.
        if (window.wavelength > 700 * nm && (ratio > 5 * (1 + 1e-9) || (ratio < 4.93 && middle < highest)))
            FAIL_CHECK("3R is ", ratio, " times Class 1 at ", window.wavelength, " m, ", window.duration,
                       " s");
    }
}

TEST_CASE("ratios add over emissions that act on the same tissue") {
    RandomStream random(15);
    for (int i = 0; i < 20'000; ++i) {
        std::vector<Emission> emissions;
        RatioSums expected;
        for (int k = 0; k < 4; ++k) {
            const EmissionWindow window = random_window(random);
            const double energy = decade_between(random, 1e-9, 1e-3);
            emissions.push_back({window, energy});
            const auto add = [&](double& sum, Mechanism mechanism) {
                if (const auto limit = class_limit(LaserClass::class_1, window, mechanism))
                    sum += energy / limit->energy;
            };
            add(expected.retinal_thermal, Mechanism::retinal_thermal);
            add(expected.photochemical, Mechanism::photochemical);
            add(expected.corneal, Mechanism::corneal);
            add(expected.ceiling, Mechanism::ceiling);
        }
        const RatioSums sums = additive_ratios(LaserClass::class_1, emissions);
        // Cut every emission in two unequal parts: nothing may change but the last bits of the sums.
        std::vector<Emission> cut;
        for (const Emission& emission : emissions) {
            const double share = random.uniform();
            cut.push_back({emission.window, emission.energy * share});
            cut.push_back({emission.window, emission.energy * (1 - share)});
        }
        const RatioSums same = additive_ratios(LaserClass::class_1, cut);
        if (!(near(sums.retinal_thermal, expected.retinal_thermal, 1e-12) &&
              near(sums.photochemical, expected.photochemical, 1e-12) &&
              near(sums.corneal, expected.corneal, 1e-12) && near(sums.ceiling, expected.ceiling, 1e-12)))
            FAIL_CHECK("sum of ratios differs from the ratios by hand, point ", i);
        if (!near(sums.largest(), same.largest(), 1e-12))
            FAIL_CHECK("cutting emissions changed the sum, point ", i);
    }
    const Emission bad[] = {{{905 * nm, 1, 0}, -1e-9}};
    CHECK_THROWS_AS((void)additive_ratios(LaserClass::class_1, bad), Error);
    CHECK(additive_ratios(LaserClass::class_1, {}).largest() == 0);
}
