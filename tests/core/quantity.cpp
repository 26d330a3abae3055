// Quantities: text to SI and back.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/core/quantity.h>
#include <glint/core/samples.h>

#include <doctest/doctest.h>
#include <cmath>

using namespace glint;

TEST_CASE("quantities read exactly as written in SI") {
    CHECK(parse_quantity("24 um", Kind::length).value == 24e-6);
    CHECK(parse_quantity("24µm", Kind::length).value == 24e-6);
    CHECK(parse_quantity("3ns", Kind::time).value == 3e-9);
    CHECK(parse_quantity(" 100 klx ", Kind::illuminance).value == 100e3);
    CHECK(parse_quantity("35 %", Kind::ratio).value == 0.35);
    CHECK(parse_quantity("0.35", Kind::ratio).value == 0.35);
    CHECK(parse_quantity("1.5e3 nm", Kind::length).value == 1.5e-6);
    CHECK(parse_quantity("-40 degC", Kind::temperature).value == about(233.15));
    CHECK(parse_quantity("180 deg", Kind::angle).value == about(pi));
    CHECK(parse_quantity("7", Kind::number).value == 7);
}

TEST_CASE("bad quantities are refused with the reason") {
    CHECK(parse_quantity("24", Kind::length).problem == "'24' lacks a unit");
    CHECK(parse_quantity("24 ns", Kind::length).problem == "'24 ns' is a time, not a length");
    CHECK(parse_quantity("24 parsec", Kind::length).problem == "unknown unit 'parsec' in '24 parsec'");
    for (const char* text : {"nan m", "inf m", "-inf m", "1e999 m", "0x10 m", "", "m", "1,5 m", "1 m m",
                             "--1 m", "1e99999999999 m", ". m", "+ m"})
        CHECK_MESSAGE(!parse_quantity(text, Kind::length).problem.empty(), text);
    CHECK(!parse_quantity("3 m", Kind::number).problem.empty());
}

TEST_CASE("a printed quantity reads back to the same double, for every kind") {
    RandomStream random(7);
    for (int k = 0; k <= static_cast<int>(Kind::number); ++k) {
        const Kind kind = static_cast<Kind>(k);
        for (int i = 0; i < 3000; ++i) {
            double value = std::pow(10.0, -12 + 18 * random.uniform()) * (i % 5 == 0 ? -1 : 1);
            if (i % 2 == 0) value = std::round(value * 1e6) / 1e6;
            const std::string text = format_quantity(value, kind);
            CHECK_MESSAGE(parse_quantity(text, kind).value == value, text);
        }
    }
}

TEST_CASE("quantities are shown in the unit that reads best") {
    CHECK(format_quantity(24e-6, Kind::length) == "24 um");
    CHECK(format_quantity(1.0, Kind::length) == "1 m");
    CHECK(format_quantity(0.35, Kind::ratio) == "35 %");
    CHECK(format_quantity(radians(20), Kind::angle) == "20 deg");
    CHECK(format_quantity(1e5, Kind::illuminance) == "100 klx");
    CHECK(format_quantity(zero_celsius + 25, Kind::temperature) == "25 degC");
    CHECK(show_quantity(0.99996, Kind::length) == "1 m");
    CHECK(show_quantity(1234.5, Kind::frequency) == "1.23 kHz");
    CHECK(show_quantity(0, Kind::power) == "0 W");
}
