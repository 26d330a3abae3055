// Apertures and distances of the measurement conditions.
#include <glint/core/error.h>
#include <glint/safety/aperture.h>
#include "points.h"

#include <doctest/doctest.h>

using namespace glint;
using namespace glint::test;

TEST_CASE("apertures and distances follow the table") {
    // IEC 60825-1:2014 Table 10: 7 mm at 100 mm two secondary sources, 2 m one, the rest from memory.
    const auto eye = [](double nanometres, double t) {
        return measurement(Condition::naked_eye, nanometres * nm, t);
    };
    const auto telescope = [](double nanometres, double t) {
        return measurement(Condition::telescope, nanometres * nm, t);
    };
    for (const double duration : {1e-9, 1.0, 100.0}) {
        CHECK(eye(905, duration).aperture == 7e-3);
        CHECK(eye(905, duration).distance == 0.1);
        CHECK(telescope(905, duration).aperture == 50e-3);
        CHECK(telescope(905, duration).distance == 2);
    }
    CHECK(eye(1550, 1e-9).aperture == 1e-3);
    CHECK(eye(1550, 1).aperture == about(1.5e-3, 1e-12));
    CHECK(eye(1450, 5).aperture == about(2.743e-3, 1e-4));
    CHECK(eye(1550, 100).aperture == 3.5e-3);
    CHECK(eye(1550, 100).distance == 0.1);
    CHECK(telescope(1550, 1e-9).aperture == about(7e-3, 1e-12));
    CHECK(telescope(1550, 100).aperture == about(24.5e-3, 1e-12));
    CHECK(telescope(1550, 100).distance == 2);
}

TEST_CASE("where cells meet the larger aperture stands") {
    const auto eye = [](double nanometres, double t) {
        return measurement(Condition::naked_eye, nanometres * nm, t).aperture;
    };
    CHECK(eye(1400, 1e-9) == 7e-3);
    CHECK(eye(1401, 1e-9) == 1e-3);
    CHECK(measurement(Condition::telescope, 1400 * nm, 1).aperture == 50e-3);
    CHECK(eye(1550, 0.35) == about(1.0119e-3, 1e-4));
    CHECK(eye(1550, 10) == about(3.5570e-3, 1e-4));
}

TEST_CASE("conditions outside the tables are refused") {
    CHECK_THROWS_AS((void)measurement(Condition::naked_eye, 399 * nm, 1), Error);
    CHECK_THROWS_AS((void)measurement(Condition::naked_eye, 1801 * nm, 1), Error);
    CHECK_THROWS_AS((void)measurement(Condition::telescope, 905 * nm, 0), Error);
    CHECK(name_of(Condition::telescope) == "Condition 1 (telescope)");
    CHECK(name_of(Condition::naked_eye) == "Condition 3 (naked eye)");
}
