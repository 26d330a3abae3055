// Correction factors, time base and angles of acceptance.
#include <glint/core/error.h>
#include <glint/safety/factors.h>
#include "points.h"

#include <doctest/doctest.h>

using namespace glint;
using namespace glint::test;

TEST_CASE("C3, C4 and C7 follow their formulas") {
    // IEC 60825-1:2014 Table 9; C3 and C4 as in the annex of the Norwegian regulations that implement
    // directive 2006/25/EC, there called CB and CA.
    CHECK(c3(400 * nm) == 1);
    CHECK(c3(450 * nm) == about(1, 1e-12));
    CHECK(c3(500 * nm) == about(10, 1e-12));
    CHECK(c3(600 * nm) == about(1000, 1e-12));
    CHECK(c4(532 * nm) == 1);
    CHECK(c4(700 * nm) == about(1, 1e-12));
    CHECK(c4(850 * nm) == about(1.9953, 3e-5));  // four decimals as printed
    CHECK(c4(905 * nm) == about(2.5704, 3e-5));
    CHECK(c4(940 * nm) == about(3.0200, 3e-5));
    CHECK(c4(950 * nm) == about(3.16228, 3e-6));
    CHECK(c4(1064 * nm) == 5);
    // C7 beyond 1200 nm: Liu, Yang, Yue, Acta Optica Sinica 40(10) 1014003 (2020), after ICNIRP 2013.
    CHECK(c7(905 * nm) == 1);
    CHECK(c7(1150 * nm) == 1);
    CHECK(c7(1180 * nm) == about(3.4674, 2e-5));
    CHECK(c7(1300 * nm) == about(108, 1e-10));
    CHECK(c7(1310 * nm) == about(259, 2e-3));  // printed without decimals
    CHECK(c7(1400 * nm) == about(1e6 + 8, 1e-10));
}

TEST_CASE("where two bands of a factor meet the smaller value stands") {
    CHECK(c4(1050 * nm) == 5);
    CHECK(c4(1049.999 * nm) == 5);  // 10^0.7 is 5.012
    CHECK(c4(1047 * nm) < 5);
    CHECK(c7(1200 * nm) == about(7.943, 1e-4));
    CHECK(c7(1200.001 * nm) == about(8.010, 1e-4));
}

TEST_CASE("alpha_max, C6 and T2 follow their formulas") {
    CHECK(alpha_max(1e-9) == 5 * mrad);
    // Both formulas give exactly 5 mrad and 100 mrad at the break points, which is what pins them.
    CHECK(alpha_max(625e-6) == about(5 * mrad, 1e-12));
    CHECK(alpha_max(624e-6) == 5 * mrad);
    CHECK(alpha_max(1e-3) == about(6.3246 * mrad, 1e-5));
    CHECK(alpha_max(0.2499999) == about(100 * mrad, 1e-6));
    CHECK(alpha_max(0.25) == 100 * mrad);
    CHECK(alpha_max(3e4) == 100 * mrad);

    CHECK(c6(0, 1e-9) == 1);
    CHECK(c6(1.5 * mrad, 1) == 1);
    CHECK(c6(3 * mrad, 1e-9) == about(2, 1e-12));
    CHECK(c6(10 * mrad, 1e-8) == about(3.3333, 2e-5));
    CHECK(c6(30 * mrad, 1e-3) == about(4.2164, 2e-5));
    CHECK(c6(50 * mrad, 0.1) == about(33.333, 2e-5));
    CHECK(c6(150 * mrad, 100) == about(66.667, 2e-5));

    CHECK(t2(0) == 10);
    CHECK(t2(1.5 * mrad) == about(10, 1e-12));
    CHECK(t2(5 * mrad) == about(10.8526, 1e-5));
    CHECK(t2(6 * mrad) == about(11.1093, 1e-5));
    CHECK(t2(30 * mrad) == about(19.4688, 1e-5));
    CHECK(t2(100 * mrad) == about(100, 1e-12));
    CHECK(t2(500 * mrad) == about(100, 1e-12));
}

TEST_CASE("grouping time, time base and angles of acceptance") {
    CHECK(grouping_time(905 * nm) == 5e-6);
    CHECK(grouping_time(1064 * nm) == 13e-6);
    CHECK(grouping_time(1450 * nm) == 1e-3);
    CHECK(grouping_time(1550 * nm) == 10);
    // The longer time groups more pulses.
    CHECK(grouping_time(1050 * nm) == 13e-6);
    CHECK(grouping_time(1400 * nm) == 1e-3);
    CHECK(grouping_time(1500 * nm) == 10);

    CHECK(time_base(905 * nm, LaserClass::class_1) == 100);
    CHECK(time_base(905 * nm, LaserClass::class_3R) == 100);
    CHECK(time_base(650 * nm, LaserClass::class_1) == 100);
    CHECK(time_base(650 * nm, LaserClass::class_3R) == 0.25);
    CHECK(time_base(650 * nm, LaserClass::class_2) == 0.25);
    CHECK(time_base(650 * nm, LaserClass::class_2M) == 0.25);
    CHECK(time_base(650 * nm, LaserClass::class_3B) == 100);
    CHECK(time_base(650 * nm, LaserClass::class_2, true) == 3e4);
    CHECK(time_base(905 * nm, LaserClass::class_1, true) == 3e4);
    CHECK(time_base(700 * nm, LaserClass::class_3R) == 100);

    CHECK(thermal_acceptance_angle(1e-9) == 5 * mrad);
    CHECK(thermal_acceptance_angle(10) == 100 * mrad);
    CHECK(photochemical_acceptance_angle(10) == 11 * mrad);
    CHECK(photochemical_acceptance_angle(100) == 11 * mrad);
    CHECK(photochemical_acceptance_angle(1000) == about(34.785 * mrad, 1e-4));
    CHECK(photochemical_acceptance_angle(1e4) == 110 * mrad);
    CHECK(photochemical_acceptance_angle(3e4) == 110 * mrad);
}

TEST_CASE("arguments out of range are refused with what is accepted") {
    const double nan = std::nan("");
    CHECK_THROWS_WITH_AS((void)c4(399 * nm),
                         "wavelength 399 nm is outside the limit tables; accepted: 400 nm to 1.4 um", Error);
    CHECK_THROWS_AS((void)c3(601 * nm), Error);
    CHECK_THROWS_AS((void)c7(1401 * nm), Error);
    CHECK_THROWS_AS((void)grouping_time(1801 * nm), Error);
    CHECK_THROWS_AS((void)time_base(nan, LaserClass::class_1), Error);
    CHECK_THROWS_AS((void)alpha_max(9e-14), Error);
    CHECK_THROWS_AS((void)alpha_max(3.01e4), Error);
    CHECK_THROWS_AS((void)alpha_max(nan), Error);
    CHECK_THROWS_AS((void)c6(-1e-9, 1), Error);
    CHECK_THROWS_AS((void)c6(1 * mrad, INFINITY), Error);
    CHECK_THROWS_AS((void)t2(3.2), Error);
    CHECK_THROWS_AS((void)t2(nan), Error);
    CHECK_THROWS_AS((void)photochemical_acceptance_angle(0), Error);
}
