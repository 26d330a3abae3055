// Limits made ready for many durations, against the evaluator that looks every cell up anew.
#include <glint/core/error.h>
#include <glint/safety/limit_curve.h>
#include "points.h"

#include <algorithm>
#include <span>
#include <vector>

using namespace glint;
using namespace glint::test;

namespace {

constexpr Mechanism mechanisms[] = {Mechanism::retinal_thermal, Mechanism::photochemical, Mechanism::corneal,
                                    Mechanism::ceiling};
constexpr LaserClass invisible[] = {LaserClass::class_1, LaserClass::class_3R, LaserClass::class_3B};
constexpr LaserClass visible[] = {LaserClass::class_1, LaserClass::class_2, LaserClass::class_3R,
                                  LaserClass::class_3B};

std::span<const LaserClass> classes_at(double wavelength) {
    return wavelength < 700 * nm * (1 - 1e-8) ? std::span<const LaserClass>(visible)
                                              : std::span<const LaserClass>(invisible);
}

// The curve multiplies the same factors in another order and takes t^0.75 by square roots: a few last bits.
constexpr double rounding = 1e-13;

void compare(const LimitCurve& curve, LaserClass laser_class, const EmissionWindow& window) {
    const double ready = curve.energy(window.duration, window.subtense, t2(window.subtense));
    const std::optional<Limit> slow = class_limit(laser_class, window, curve.mechanism);
    const bool same = slow ? near(ready, slow->energy, rounding) : std::isinf(ready);
    if (!same)
        FAIL_CHECK(name_of(laser_class), ", ", name_of(curve.mechanism), ": ", ready, " J, not ",
                   slow ? slow->energy : INFINITY, " J at ", window.wavelength, " m, ", window.duration,
                   " s, ", window.subtense, " rad");
}

// Anything up to alpha_max, with the ends more often than chance would have them.
double random_subtense(RandomStream& random, double duration) {
    const double largest = alpha_max(duration);
    switch (random.below(8)) {
        case 0:
            return largest;
        case 1:
            return alpha_min;
        case 2:
            return 0;
        default:
            return decade_between(random, 1e-4, largest);
    }
}

}  // namespace

TEST_CASE("a limit curve is the limit of every class and mechanism, all over the tables") {
    constexpr int wavelengths = 20'000,
                  points_each = 10;  // 200,000 points, each for all classes and mechanisms
    RandomStream random(51);
    for (int i = 0; i < wavelengths; ++i) {
        const double wavelength = uniform_between(random, 400 * nm, 1800 * nm);
        std::vector<EmissionWindow> windows;
        for (int k = 0; k < points_each; ++k) {
            const double duration = decade_between(random, 1e-13, 3e4);
            windows.push_back({wavelength, duration, random_subtense(random, duration)});
        }
        for (const LaserClass laser_class : classes_at(wavelength))
            for (const Mechanism mechanism : mechanisms) {
                const LimitCurve curve = limit_curve(laser_class, wavelength, mechanism);
                for (const EmissionWindow& window : windows) compare(curve, laser_class, window);
            }
    }
}

TEST_CASE("a limit curve is the limit where cells meet") {
    std::vector<double> wavelengths{400,  450,  484,  500,  600,  650,  700,  905, 1050,
                                    1150, 1200, 1250, 1400, 1450, 1500, 1550, 1800};
    for (double& wavelength : wavelengths) wavelength *= nm;
    for (const double wavelength : wavelengths)
        for (const LaserClass laser_class : classes_at(wavelength))
            for (const Mechanism mechanism : mechanisms) {
                const LimitCurve curve = limit_curve(laser_class, wavelength, mechanism);
                for (const double subtense : {0.0, 1.5e-3, 4e-3, 5e-3, 30e-3, 82e-3, 100e-3}) {
                    std::vector<double> durations = curve.bends;
                    durations.push_back(t2(subtense));
                    for (const double duration : durations)
                        // On the bound itself, within what counts as on it, and on either side of it.
                        for (const double beside : {1 - 1e-7, 1 - 1e-10, 1.0, 1 + 1e-10, 1 + 1e-7}) {
                            const double at =
                                std::clamp(duration * beside, limit_durations.from, limit_durations.to);
                            compare(curve, laser_class, {wavelength, at, std::min(subtense, alpha_max(at))});
                        }
                }
            }
}

TEST_CASE("a limit curve falls nowhere but at its bends") {
    RandomStream random(52);
    for (int i = 0; i < 2000; ++i) {
        const double wavelength = uniform_between(random, 400 * nm, 1800 * nm);
        for (const LaserClass laser_class : classes_at(wavelength))
            for (const Mechanism mechanism : mechanisms) {
                const LimitCurve curve = limit_curve(laser_class, wavelength, mechanism);
                CHECK(std::ranges::is_sorted(curve.bends));
                for (std::size_t k = 1; k < curve.bends.size(); ++k) {
                    const double from = curve.bends[k - 1] * (1 + 1e-8), to = curve.bends[k] * (1 - 1e-8);
                    const double early = decade_between(random, from, to),
                                 late = decade_between(random, early, to);
                    const double subtense = random_subtense(random, early);
                    const double before = curve.energy(early, subtense, t2(subtense));
                    const double after = curve.energy(late, subtense, t2(subtense));
                    if (after < before * (1 - rounding))
                        FAIL_CHECK(before, " J falls to ", after, " J from ", early, " s to ", late, " s at ",
                                   wavelength, " m");
                }
            }
    }
}

TEST_CASE("limit curves are refused where there is no limit") {
    CHECK_THROWS_AS((void)limit_curve(LaserClass::class_4, 905 * nm, Mechanism::retinal_thermal), Error);
    CHECK_THROWS_AS((void)limit_curve(LaserClass::class_2, 905 * nm, Mechanism::retinal_thermal), Error);
    CHECK_THROWS_AS((void)limit_curve(LaserClass::class_2M, 700 * nm, Mechanism::retinal_thermal), Error);
    CHECK_THROWS_AS((void)limit_curve(LaserClass::class_1, 1900 * nm, Mechanism::corneal), Error);
    // A class without limits of a mechanism is no error: nothing holds.
    CHECK(limit_curve(LaserClass::class_3B, 905 * nm, Mechanism::retinal_thermal).pieces.empty());
    CHECK(limit_curve(LaserClass::class_1, 905 * nm, Mechanism::photochemical).pieces.empty());
    CHECK(
        std::isinf(limit_curve(LaserClass::class_1, 905 * nm, Mechanism::corneal).energy(1, alpha_min, 10)));
}
