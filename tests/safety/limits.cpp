// Accessible emission limits at single points: vectors, cell boundaries, refusals.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/safety/aperture.h>
#include <glint/safety/limits.h>
#include "points.h"

#include <doctest/doctest.h>
#include <algorithm>
#include <vector>

using namespace glint;
using namespace glint::test;

namespace {

double class_1(double wavelength, double duration, double subtense = 0) {
    return class_limit(LaserClass::class_1, {wavelength, duration, subtense}).energy;
}

}  // namespace

TEST_CASE("Class 1 limits agree with the exposure limits times the area of the aperture") {
    // IEC 60825-1:2014 Tables 3 and 4 against the ICNIRP 2013 exposure limits (Health Physics 105(3)
    // 271-295), both from memory: this shows consistency, not truth. Digits as printed, hence half of the
    // last one: 5e-5 of the smallest mantissa, and 3e-5 for ratios.
    struct Row {
        double nanometres, duration, milliradians, aperture, limit, exposure, ratio;
    };
    constexpr Row rows[] = {
        {532, 1e-8, 0, 7, 7.7000e-8, 7.6969e-8, 1.0004},   {650, 0.25, 0, 7, 2.4749e-4, 2.4491e-4, 1.0105},
        {850, 1e-9, 0, 7, 1.5364e-7, 1.5357e-7, 1.0004},   {850, 1e-3, 0, 7, 7.8541e-6, 7.7725e-6, 1.0105},
        {850, 100, 0, 7, 7.7815e-2, 7.6787e-2, 1.0134},    {905, 5e-9, 0, 7, 1.9792e-7, 1.9784e-7, 1.0004},
        {905, 1e-4, 0, 7, 1.7993e-6, 1.7806e-6, 1.0105},   {905, 1e-8, 10, 7, 6.5973e-7, 6.5947e-7, 1.0004},
        {940, 1e-3, 30, 7, 5.0123e-5, 4.9602e-5, 1.0105},  {940, 0.1, 50, 7, 1.2531e-2, 1.2400e-2, 1.0105},
        {940, 100, 10, 7, 7.5411e-1, 7.4627e-1, 1.0105},   {940, 100, 60, 7, 3.3782, 3.3430, 1.0105},
        {940, 100, 150, 7, 4.4566, 4.4103, 1.0105},        {1064, 1e-8, 0, 7, 7.7000e-7, 7.6969e-7, 1.0004},
        {1064, 1e-3, 20, 7, 8.2986e-5, 8.2123e-5, 1.0105}, {1180, 1, 0, 7, 1.2136e-2, 1.2010e-2, 1.0105},
        {1300, 1e-8, 0, 7, 8.3160e-5, 8.3127e-5, 1.0004},  {1450, 0.1, 0, 1, 2.4743e-3, 2.4733e-3, 1.0004},
        {1450, 5, 0, 2.743, 5.0000e-2, 4.9480e-2, 1.0105}, {1550, 1e-8, 0, 1, 8.0000e-3, 7.8540e-3, 1.0186},
        {1550, 1, 0, 1.5, 1.8000e-2, 1.7671e-2, 1.0186},   {1550, 100, 0, 3.5, 1.0000, 9.6211e-1, 1.0394},
    };
    for (const Row& row : rows) {
        CAPTURE(row.nanometres);
        CAPTURE(row.duration);
        const double wavelength = row.nanometres * nm;
        const double limit = class_1(wavelength, row.duration, row.milliradians * mrad);
        CHECK(limit == about(row.limit, 5e-5));
        CHECK(limit / row.exposure == about(row.ratio, 8e-5));
        const MeasurementCondition eye = measurement(Condition::naked_eye, wavelength, row.duration);
        CHECK(eye.aperture == about(row.aperture * 1e-3, 2e-4));
        CHECK(eye.distance == 0.1);
    }
}

TEST_CASE("continuous-wave Class 1 limits over wavelength and subtense") {
    // Derived from IEC 60825-1:2014 Table 4 (from memory), 100 s, in mW; half of the fourth decimal.
    struct Row {
        double nanometres;
        std::array<double, 6> milliwatts;
    };
    constexpr std::array subtenses{1.5, 5.0, 10.0, 30.0, 60.0, 100.0};
    constexpr Row rows[] = {
        {850, {0.7782, 2.5650, 4.9823, 13.2982, 22.3193, 29.4447}},
        {905, {1.0025, 3.3044, 6.4185, 17.1314, 28.7528, 37.9321}},
        {940, {1.1778, 3.8823, 7.5411, 20.1276, 33.7817, 44.5663}},
        {980, {1.4160, 4.6676, 9.0664, 24.1988, 40.6145, 53.5805}},
        {1064, {1.9500, 6.4278, 12.4854, 33.3245, 55.9308, 73.7865}},
        {1550, {10, 10, 10, 10, 10, 10}},
    };
    for (const Row& row : rows)
        for (std::size_t i = 0; i < subtenses.size(); ++i) {
            const EmissionWindow window{row.nanometres * nm, 100, subtenses[i] * mrad};
            const double milliwatts = class_limit(LaserClass::class_1, window).power * 1e3;
            CHECK(std::abs(milliwatts - row.milliwatts[i]) < 5.1e-5);
        }
    // Larger than 100 mrad is as 100 mrad.
    CHECK(class_1(940 * nm, 100, 0.5) == about(class_1(940 * nm, 100, 0.1), 1e-12));
}

TEST_CASE("the photochemical limit from 400 nm to 600 nm") {
    // IEC 60825-1:2014 Table 3, from memory: 3.9e-3 C3 J to 100 s, then 3.9e-5 C3 W.
    CHECK(class_1(440 * nm, 50) == about(3.9e-3, 1e-12));
    CHECK(class_1(440 * nm, 1000) == about(3.9e-2, 1e-12));
    CHECK(class_limit(LaserClass::class_1, {440 * nm, 1000, 0}).row->mechanism == Mechanism::photochemical);
    CHECK(class_1(480 * nm, 1000) == about(3.9e-5 * 3.98107 * 1000, 1e-5));
    // From 500 nm on C3 is at least 10 and a point source is bound by heat again.
    CHECK(class_limit(LaserClass::class_1, {520 * nm, 1000, 0}).row->mechanism == Mechanism::retinal_thermal);
    CHECK(class_1(520 * nm, 1000) == about(0.39, 1e-12));
    // Starts at 1 s for 400-484 nm and sources of 1.5 to 82 mrad, at 10 s for all others.
    const auto blue = [](double nanometres, double duration, double milliradians) {
        return class_limit(LaserClass::class_1, {nanometres * nm, duration, milliradians * mrad},
                           Mechanism::photochemical);
    };
    CHECK(blue(470, 2, 30));
    CHECK(blue(484, 1, 82));
    CHECK(!blue(485, 2, 30));
    CHECK(!blue(470, 0.9, 30));
    CHECK(!blue(470, 2, 83));
    CHECK(!blue(470, 2, 1.5));
    CHECK(blue(485, 10, 83));
    CHECK(!blue(601, 50, 30));
}

TEST_CASE("limits of the other classes") {
    const auto energy = [](LaserClass laser_class, double nanometres, double duration, double subtense = 0) {
        return class_limit(laser_class, {nanometres * nm, duration, subtense}).energy;
    };
    using enum LaserClass;
    CHECK(energy(class_1M, 905, 1e-3) == energy(class_1, 905, 1e-3));
    CHECK(energy(class_2, 650, 0.1) == energy(class_1, 650, 0.1));
    CHECK(energy(class_2, 650, 1, 3 * mrad) == about(2e-3, 1e-12));
    CHECK(energy(class_2M, 650, 1, 3 * mrad) == about(2e-3, 1e-12));
    // Printed Class 3R values of IEC 60825-1:2014 Table 6, from memory; the stricter of these and five times
    // Class 1.
    CHECK(energy(class_3R, 905, 1e-12) == about(1.9e-7, 1e-12));
    CHECK(energy(class_3R, 905, 5e-9) == about(3.8e-7 * c4(905 * nm), 1e-12));
    CHECK(energy(class_3R, 532, 1e-6) == about(3.8e-7, 1e-12));
    CHECK(energy(class_3R, 532, 0.2) == about(5 * energy(class_1, 532, 0.2), 1e-12));
    CHECK(energy(class_3R, 532, 0.3) == about(1.5e-3, 1e-12));
    CHECK(energy(class_3R, 905, 1) == about(5 * energy(class_1, 905, 1), 1e-12));
    CHECK(energy(class_3R, 905, 100) == about(5 * energy(class_1, 905, 100), 1e-12));
    CHECK(energy(class_3R, 1064, 1) == about(5 * energy(class_1, 1064, 1), 1e-12));
    CHECK(energy(class_1, 1450, 1e-10) == about(8e5 * 1e-10, 1e-12));
    CHECK(energy(class_1, 1550, 1e-10) == about(8e6 * 1e-10, 1e-12));
    CHECK(energy(class_3R, 1450, 1e-10) == about(4e6 * 1e-10, 1e-12));
    CHECK(energy(class_3R, 1550, 5) == about(5 * energy(class_1, 1550, 5), 1e-12));
    // Class 3B, IEC 60825-1:2014 Table 8, from memory.
    CHECK(energy(class_3B, 532, 1e-8) == about(0.03, 1e-12));
    CHECK(energy(class_3B, 532, 0.1) == about(0.05, 1e-12));
    CHECK(energy(class_3B, 905, 0.1) == about(0.03 * c4(905 * nm), 1e-12));
    CHECK(energy(class_3B, 905, 0.2) == about(0.1, 1e-12));
    CHECK(energy(class_3B, 905, 1e-10) == about(3e7 * 1e-10 * c4(905 * nm), 1e-12));
    CHECK(energy(class_3B, 1064, 1e-10) == about(1.5e-2, 1e-12));
    CHECK(energy(class_3B, 1064, 0.2) == about(0.15, 1e-12));
    CHECK(energy(class_3B, 1550, 1e-10) == about(1.25e-2, 1e-12));
    CHECK(energy(class_3B, 1550, 0.2) == about(0.125, 1e-12));
    CHECK(energy(class_3B, 1550, 2) == about(1, 1e-12));
}

TEST_CASE("Class 3B bounds the retinal limit near 1400 nm") {
    // Schulmeister, Stuck, J. Laser Appl. 36(3) 032013 (2024): the 3B limit is the second upper bound. C7 =
    // 1e6.
    const Limit limit = class_limit(LaserClass::class_1, {1399 * nm, 1e-3, 0});
    CHECK(limit.energy == about(0.15, 1e-12));
    CHECK(limit.row->mechanism == Mechanism::ceiling);
    CHECK(class_limit(LaserClass::class_1, {1399 * nm, 1e-3, 0}, Mechanism::retinal_thermal)->energy > 10);
    CHECK(class_limit(LaserClass::class_3R, {1399 * nm, 100, 0}).power == about(0.5, 1e-12));
}

TEST_CASE("where cells meet the smallest of all neighbours stands") {
    // Derived: printed values of neighbouring cells at the break points, IEC 60825-1:2014 Tables 3 and 4.
    CHECK(class_1(532 * nm, 5e-6) == about(7.402e-8, 1e-4));
    CHECK(class_1(532 * nm, 4.9e-6) == about(7.7e-8, 1e-12));
    CHECK(class_1(1064 * nm, 13e-6) == about(7.577e-7, 1e-4));
    CHECK(class_1(532 * nm, 10) == about(3.9e-3, 1e-12));
    CHECK(class_1(532 * nm, 9.9999) == about(3.936e-3, 1e-4));
    CHECK(class_1(1450 * nm, 1e-3) == about(7.82e-4, 1e-3));
    CHECK(class_1(1450 * nm, 0.35) == about(3.384e-3, 1e-3));
    CHECK(class_1(1550 * nm, 0.35) == about(8e-3, 1e-12));
    CHECK(class_1(1550 * nm, 10) == about(0.1, 1e-12));
    CHECK(class_1(905 * nm, 1e-11) == about(3.8e-8, 1e-12));
    CHECK(class_1(1050 * nm, 1e-6) == about(3.85e-7, 1e-12));

    // Every crossing of a wavelength break with a duration break, against its four neighbours. 1e-7 aside, C7
    // changes by 1.3e-5 and nothing changes faster.
    const double wavelengths[] = {450, 484, 600, 700, 1050, 1150, 1200, 1250, 1400, 1500};
    const double durations[] = {1e-11, 1e-9, 5e-6, 13e-6, 625e-6, 1e-3, 0.06, 0.25, 0.35, 1, 10, 100};
    for (const LaserClass laser_class : {LaserClass::class_1, LaserClass::class_3R, LaserClass::class_3B})
        for (const double subtense : {1e-3, 1.5e-3, 4e-3, 30e-3, 82e-3, 90e-3, 0.2})
            for (const double nanometres : wavelengths)
                for (const double duration : durations) {
                    double least = INFINITY;
                    for (const double left : {1 - 1e-7, 1 + 1e-7})
                        for (const double below : {1 - 1e-7, 1 + 1e-7})
                            least = std::min(least, class_limit(laser_class, {nanometres * nm * left,
                                                                              duration * below, subtense})
                                                        .energy);
                    const double at = class_limit(laser_class, {nanometres * nm, duration, subtense}).energy;
                    CAPTURE(nanometres);
                    CAPTURE(duration);
                    CAPTURE(subtense);
                    CHECK(near(at, least, 5e-5));
                }
}

TEST_CASE("a limit names the row that set it") {
    const Limit pulse = class_limit(LaserClass::class_1, {905 * nm, 5e-9, 0});
    CHECK(describe(*pulse.row) == "7.7e-8 C4 C6 J, retinal thermal, 700 nm to 1050 nm, 10 ps to 5 us");
    const Limit steady = class_limit(LaserClass::class_1, {905 * nm, 100, 30 * mrad});
    CHECK(describe(*steady.row) ==
          "0.0007 C4 C6 C7 T2^-0.25 W, retinal thermal, 700 nm to 1400 nm, 10 s to 30000 s, extended source, "
          "beyond "
          "T2");
    CHECK(steady.power == about(steady.energy / 100, 1e-12));
}

TEST_CASE("emissions out of range are refused") {
    const auto limit = [](LaserClass laser_class, double wavelength, double duration, double subtense) {
        return class_limit(laser_class, {wavelength, duration, subtense});
    };
    using enum LaserClass;
    const double nan = std::nan("");
    CHECK_THROWS_WITH_AS((void)limit(class_1, 399 * nm, 1, 0),
                         "wavelength 399 nm is outside the limit tables; accepted: 400 nm to 1.8 um", Error);
    CHECK_THROWS_AS((void)limit(class_1, 1801 * nm, 1, 0), Error);
    CHECK_THROWS_AS((void)limit(class_1, 905 * nm, 0.99e-13, 0), Error);
    CHECK_THROWS_AS((void)limit(class_1, 905 * nm, 3.1e4, 0), Error);
    CHECK_THROWS_AS((void)limit(class_1, 905 * nm, 1, -1e-6), Error);
    CHECK_THROWS_AS((void)limit(class_1, 905 * nm, 1, 3.2), Error);
    CHECK_THROWS_AS((void)limit(class_1, nan, 1, 0), Error);
    CHECK_THROWS_AS((void)limit(class_1, 905 * nm, nan, 0), Error);
    CHECK_THROWS_AS((void)limit(class_1, 905 * nm, 1, nan), Error);
    CHECK_THROWS_AS((void)limit(class_1, 905 * nm, INFINITY, 0), Error);
    CHECK_THROWS_WITH_AS((void)limit(class_2, 905 * nm, 1, 0),
                         "Class 2 has no limit at 905 nm; accepted: a wavelength from 400 nm to below 700 nm",
                         Error);
    CHECK_THROWS_AS((void)limit(class_2M, 700 * nm, 1, 0), Error);
    CHECK_THROWS_AS((void)limit(class_4, 905 * nm, 1, 0), Error);
    CHECK_NOTHROW((void)limit(class_1, 400 * nm, 1e-13, 0));
    CHECK_NOTHROW((void)limit(class_1, 1800 * nm, 3e4, 3.1415926));
}
