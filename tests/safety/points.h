// Seeded random emissions and the units tables are written in, for the tests of this room.
#pragma once

#include <glint/core/samples.h>
#include <glint/safety/limits.h>

#include <doctest/doctest.h>
#include <cmath>

namespace glint::test {

inline constexpr double nm = 1e-9, mrad = 1e-3;

/// Whether a and b agree within a relative tolerance.
inline bool near(double a, double b, double tolerance) { return std::abs(a - b) <= tolerance * std::abs(b); }

/// For CHECK: purely relative. doctest::Approx alone adds 1 to the scale and would pass any nanojoule.
inline doctest::Approx about(double value, double tolerance) {
    return doctest::Approx(value).epsilon(tolerance).scale(0);
}

inline double uniform_between(RandomStream& random, double low, double high) {
    return low + (high - low) * random.uniform();
}

/// Equal chance for every decade.
inline double decade_between(RandomStream& random, double low, double high) {
    return std::exp(uniform_between(random, std::log(low), std::log(high)));
}

/// Anywhere in the tables; subtense 0.1 mrad to 1 rad.
inline EmissionWindow random_window(RandomStream& random) {
    return {.wavelength = uniform_between(random, 400 * nm, 1800 * nm),
            .duration = decade_between(random, 1e-13, 3e4),
            .subtense = decade_between(random, 1e-4, 1)};
}

}  // namespace glint::test
