// The order of the class tests.
#include <glint/core/error.h>
#include <glint/safety/class.h>

#include <doctest/doctest.h>
#include <cmath>

using namespace glint;

TEST_CASE("class decision table") {
    // IEC 60825-1:2014, 4.3 and 5.3. The scheme of 1, 1M, 2 and 2M as in GOST IEC 60825-1-2013 (identical to
    // IEC 60825-1:2007), clause 8.3 e); without Condition 2 by two secondary sources; the combination from
    // memory.
    using enum LaserClass;
    struct Row {
        ClassRatios ratios;
        LaserClass expected;
    };
    const Row rows[] = {
        // Near infrared: limits 1 : 5 : 3B, written as ratios.
        {{.class_1 = {0.9, 0.8}, .class_3R = {0.18, 0.16}, .class_3B = {1e-3, 1e-3}}, class_1},
        {{.class_1 = {1, 1}, .class_3R = {0.2, 0.2}, .class_3B = {1e-3, 1e-3}}, class_1},
        {{.class_1 = {30, 0.8}, .class_3R = {6, 0.16}, .class_3B = {0.9, 1e-3}}, class_1M},
        {{.class_1 = {3, 1}, .class_3R = {0.6, 0.2}, .class_3B = {1e-2, 1e-3}}, class_1M},
        // Too strong for 1M behind a telescope; the same ratios leave 3R and 3B, too.
        {{.class_1 = {3000, 0.8}, .class_3R = {600, 0.16}, .class_3B = {1, 1e-3}}, class_3B},
        {{.class_1 = {3000, 0.8}, .class_3R = {600, 0.16}, .class_3B = {1.1, 1e-3}}, class_4},
        // Only the naked eye fails: no 1M.
        {{.class_1 = {0.5, 2}, .class_3R = {0.1, 0.4}, .class_3B = {1e-3, 1e-2}}, class_3R},
        {{.class_1 = {5, 5}, .class_3R = {1, 1}, .class_3B = {1e-2, 1e-2}}, class_3R},
        {{.class_1 = {6, 4}, .class_3R = {1.2, 0.8}, .class_3B = {1e-2, 1e-2}}, class_3B},
        {{.class_1 = {4, 6}, .class_3R = {0.8, 1.2}, .class_3B = {1, 1}}, class_3B},
        {{.class_1 = {1e4, 1e4}, .class_3R = {2e3, 2e3}, .class_3B = {0.9, 1.1}}, class_4},
        // Visible: Class 2 stands between 1M and 3R.
        {{.class_1 = {2, 2}, .class_2 = {{0.8, 0.8}}, .class_3R = {0.2, 0.2}, .class_3B = {1e-3, 1e-3}},
         class_2},
        {{.class_1 = {20, 2}, .class_2 = {{8, 0.8}}, .class_3R = {1.6, 0.2}, .class_3B = {1e-2, 1e-3}},
         class_2M},
        {{.class_1 = {20, 2}, .class_2 = {{8, 0.8}}, .class_3R = {1.6, 0.2}, .class_3B = {1, 1e-3}},
         class_3B},
        {{.class_1 = {4, 4}, .class_2 = {{1.6, 1.6}}, .class_3R = {0.8, 0.8}, .class_3B = {1e-3, 1e-3}},
         class_3R},
        {{.class_1 = {2, 0.9}, .class_2 = {{0.8, 0.4}}, .class_3R = {0.2, 0.1}, .class_3B = {1e-3, 1e-3}},
         class_1M},
        {{}, class_1},
    };
    for (const Row& row : rows) {
        CAPTURE(row.ratios.class_1.condition_1);
        CAPTURE(row.ratios.class_1.condition_3);
        CHECK(name_of(indicated_class(row.ratios)) == name_of(row.expected));
    }
}

TEST_CASE("ratios that are no ratios are refused") {
    CHECK_THROWS_AS((void)indicated_class({.class_1 = {-0.1, 0}}), Error);
    CHECK_THROWS_AS((void)indicated_class({.class_1 = {0, std::nan("")}}), Error);
    CHECK_THROWS_AS((void)indicated_class({.class_2 = ConditionRatios{INFINITY, 0}}), Error);
    CHECK_THROWS_AS((void)indicated_class({.class_3R = {0, -1}}), Error);
    CHECK_THROWS_AS((void)indicated_class({.class_3B = {0, INFINITY}}), Error);
}

TEST_CASE("class names") {
    CHECK(name_of(LaserClass::class_1) == "Class 1");
    CHECK(name_of(LaserClass::class_2M) == "Class 2M");
    CHECK(name_of(LaserClass::class_3R) == "Class 3R");
    CHECK(name_of(LaserClass::class_4) == "Class 4");
    CHECK(laser_classes.size() == 7);
}
