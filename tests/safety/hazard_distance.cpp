// Hazard distances: closed forms, through an aperture, extended sources.
#include <glint/core/error.h>
#include <glint/safety/hazard_distance.h>
#include <glint/safety/limits.h>
#include "points.h"

#include <doctest/doctest.h>

using namespace glint;
using namespace glint::test;

TEST_CASE("hazard distance of a continuous beam, three forms") {
    // Derived: 905 nm, 0.5 W, 63 % divergence 5 mrad, exit 5 mm, 10 C4 W/m2.
    const HazardDistance closed = hazard_distance({0.5, 10 * c4(905 * nm), 5e-3, 5 * mrad});
    CHECK(closed.linear == about(30.48, 2e-4));
    CHECK(closed.quadrature == about(31.46, 2e-4));
    CHECK(closed.larger() == closed.quadrature);
    const double numeric = hazard_distance_through_aperture(
        {.wavelength = 905 * nm, .duration = 100, .energy = 50, .exit_width = 5e-3, .divergence = 5 * mrad});
    CHECK(numeric == about(30.25, 2e-4));
}

TEST_CASE("the share of a Gaussian beam through an aperture") {
    // Derived: 10 deg half angle at 1/e2; 7 mm at 100 mm and 50 mm at 2 m.
    const double tangent = std::tan(10 * 3.14159265358979 / 180);
    CHECK(gaussian_share(7e-3, width_63_of_gaussian(0.2 * tangent)) == about(0.075776, 1e-5));
    CHECK(gaussian_share(50e-3, width_63_of_gaussian(4 * tangent)) == about(0.010001, 5e-5));
    CHECK(gaussian_share(1, 1) == about(1 - std::exp(-1.0), 1e-12));  // what d63 means
    CHECK(gaussian_share(7e-3, 0) == 1);
    CHECK(gaussian_share(0, 1e-3) == 0);
    CHECK(gaussian_share(1e-9, 1) == about(1e-18, 1e-12));
}

TEST_CASE("beams below the limit have no hazard distance") {
    CHECK(hazard_distance({1e-3, 25, 10e-3, 1 * mrad}).larger() == 0);
    CHECK(hazard_distance({0, 25, 0, 1 * mrad}).larger() == 0);
    ApertureBeam beam{.wavelength = 905 * nm, .duration = 5e-9, .energy = 1.9e-7, .divergence = 1 * mrad};
    CHECK(hazard_distance_through_aperture(beam) == 0);
    beam.energy = 2e-7;
    CHECK(hazard_distance_through_aperture(beam) > 0);
    beam.energy = 0;
    CHECK(hazard_distance_through_aperture(beam) == 0);
}

TEST_CASE("the closed forms are on the safe side of the aperture form, and agree far out") {
    RandomStream random(31);
    for (int i = 0; i < 2000; ++i) {
        const double power = decade_between(random, 2e-3, 1e3);
        const ApertureBeam beam{.wavelength = uniform_between(random, 700 * nm, 1100 * nm),
                                .duration = 100,
                                .energy = power * 100,
                                .exit_width = decade_between(random, 1e-4, 1e-2),
                                .divergence = decade_between(random, 1e-4, 0.1)};
        const double limit = class_limit(LaserClass::class_1, {beam.wavelength, 100, 0}).power;
        const HazardDistance closed =
            hazard_distance({power, exposure_limit(limit, 7e-3), beam.exit_width, beam.divergence});
        const double numeric = hazard_distance_through_aperture(beam);
        if (numeric > closed.linear * (1 + 1e-9)) FAIL_CHECK(numeric, " m above ", closed.linear, " m");
        if (closed.linear > closed.quadrature * (1 + 1e-12))
            FAIL_CHECK("linear form above the quadrature form");
        // 1 - exp(-x) = x (1 - x/2): the forms part by about a quarter of limit/emission in width.
        const double part = limit / power;
        const double width = numeric * beam.divergence + beam.exit_width;
        const double closed_width = closed.linear * beam.divergence + beam.exit_width;
        if (part < 0.1 && !near(width, closed_width, 0.3 * part))
            FAIL_CHECK("widths ", width, " and ", closed_width);
    }
}

TEST_CASE("extended sources: no distance beyond the answer is above the limit") {
    RandomStream random(32);
    int extended = 0;
    for (int i = 0; i < 400; ++i) {
        const ApertureBeam beam{.wavelength = uniform_between(random, 400 * nm, 1800 * nm),
                                .duration = decade_between(random, 1e-9, 100),
                                .energy = decade_between(random, 1e-7, 1e2),
                                .exit_width = decade_between(random, 1e-4, 3e-2),
                                .divergence = decade_between(random, 1e-3, 1),
                                .source_width = decade_between(random, 1e-4, 0.3),
                                .capture_gain = 1 + random.uniform()};
        const auto ratio = [&](double r) {
            const double limit = class_limit(LaserClass::class_1, {beam.wavelength, beam.duration,
                                                                   std::min(beam.source_width / r, 3.14)})
                                     .energy;
            const double share = 1 - std::exp(-std::pow(7e-3 / (beam.exit_width + beam.divergence * r), 2));
            return beam.energy * beam.capture_gain * share / limit;
        };
        const double answer = hazard_distance_through_aperture(beam);
        if (answer > 0 && answer < beam.source_width / 1.5e-3 && beam.wavelength < 1400 * nm) ++extended;
        // Slow version: a fine walk outwards.
        double last = 0;
        for (double r = 1e-4; r < 1e6; r *= 1.0005)
            if (ratio(r) > 1) last = r;
        if (last > answer * (1 + 1e-9)) FAIL_CHECK("still above at ", last, " m, answer ", answer, " m");
        if (last > 1e-4 * 1.01 && answer > last * 1.00052)
            FAIL_CHECK("answer ", answer, " m, last above at ", last, " m");
    }
    CHECK(extended > 30);
}

TEST_CASE("beams out of range are refused") {
    CHECK_THROWS_AS((void)hazard_distance({-1, 25, 0, 1e-3}), Error);
    CHECK_THROWS_AS((void)hazard_distance({1, 0, 0, 1e-3}), Error);
    CHECK_THROWS_AS((void)hazard_distance({1, 25, -1e-3, 1e-3}), Error);
    CHECK_THROWS_AS((void)hazard_distance({1, 25, 0, 0}), Error);
    CHECK_THROWS_AS((void)hazard_distance({INFINITY, 25, 0, 1e-3}), Error);
    CHECK_THROWS_AS((void)exposure_limit(1, 0), Error);
    CHECK_THROWS_AS((void)gaussian_share(-1, 1), Error);
    CHECK_THROWS_AS((void)gaussian_share(1, std::nan("")), Error);
    ApertureBeam beam{.wavelength = 905 * nm, .duration = 1, .energy = 1, .divergence = 1e-3};
    CHECK_NOTHROW((void)hazard_distance_through_aperture(beam));
    beam.wavelength = 300 * nm;
    CHECK_THROWS_AS((void)hazard_distance_through_aperture(beam), Error);
    beam.wavelength = 905 * nm, beam.source_width = -1;
    CHECK_THROWS_AS((void)hazard_distance_through_aperture(beam), Error);
    beam.source_width = 0, beam.divergence = 0;
    CHECK_THROWS_AS((void)hazard_distance_through_aperture(beam), Error);
}
