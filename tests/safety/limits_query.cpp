// One question to the tables: every value of the answer, and the caution.
#include <glint/core/error.h>
#include <glint/safety/caution.h>
#include <glint/safety/limits_query.h>
#include "points.h"

#include <doctest/doctest.h>

using namespace glint;
using namespace glint::test;

namespace {

bool notes_mention(const LimitsAnswer& answer, std::string_view words) {
    for (const std::string& note : answer.notes)
        if (note.find(words) != std::string::npos) return true;
    return false;
}

}  // namespace

TEST_CASE("an answer gathers factors, limits and the pulse criteria") {
    const LimitsAnswer answer =
        look_up_limits({.wavelength = 905 * nm, .duration = 5e-9, .subtense = 30 * mrad, .repetition = 1e4});
    CHECK(answer.C4 == c4(905 * nm));
    CHECK(answer.C6 == c6(30 * mrad, 5e-9));
    CHECK(answer.C7 == 1.0);
    CHECK(answer.T2 == t2(30 * mrad));
    CHECK(answer.alpha_max == 5 * mrad);
    CHECK(answer.class_1.energy == class_limit(LaserClass::class_1, {905 * nm, 5e-9, 30 * mrad}).energy);
    CHECK(answer.class_3R.energy == class_limit(LaserClass::class_3R, {905 * nm, 5e-9, 30 * mrad}).energy);
    CHECK(answer.class_3B.energy == class_limit(LaserClass::class_3B, {905 * nm, 5e-9, 30 * mrad}).energy);
    CHECK(!answer.class_2);
    REQUIRE(answer.train);
    CHECK(answer.train->N == about(194'688, 1e-5));
    CHECK(notes_mention(answer, "larger than alpha_max"));
    CHECK(notes_mention(answer, "regular train"));
}

TEST_CASE("what does not apply is absent") {
    const LimitsAnswer answer = look_up_limits({.wavelength = 1550 * nm, .duration = 5e-9});
    CHECK(!answer.C4);
    CHECK(!answer.C6);
    CHECK(!answer.C7);
    CHECK(!answer.T2);
    CHECK(!answer.alpha_max);
    CHECK(!answer.train);
    CHECK(answer.notes.empty());
    CHECK(look_up_limits({.wavelength = 650 * nm, .duration = 1}).class_2->power == about(1e-3, 1e-12));
    const LimitsAnswer limited =
        look_up_limits({.wavelength = 905 * nm, .duration = 5e-9, .repetition = 1e3, .pulses = 10});
    CHECK(limited.train->N == 10);
}

TEST_CASE("notes say where a rule is unsure or limited") {
    CHECK(notes_mention(look_up_limits({.wavelength = 1310 * nm, .duration = 1e-9}), "A11:2021"));
    CHECK(!notes_mention(look_up_limits({.wavelength = 1240 * nm, .duration = 1e-9}), "A11:2021"));
    CHECK(notes_mention(look_up_limits({.wavelength = 905 * nm, .duration = 1e-12}), "without C4"));
    CHECK(notes_mention(look_up_limits({.wavelength = 450 * nm, .duration = 1}), "photochemical"));
    CHECK(notes_mention(look_up_limits({.wavelength = 1450 * nm, .duration = 1e-9, .repetition = 10}),
                        "0.35 s"));
}

TEST_CASE("questions that make no sense are refused") {
    CHECK_THROWS_AS((void)look_up_limits({.wavelength = 905 * nm, .duration = 1e-3, .repetition = 1001}),
                    Error);
    CHECK_THROWS_AS((void)look_up_limits({.wavelength = 905 * nm, .duration = 1e-3, .pulses = 3}), Error);
    CHECK_THROWS_AS((void)look_up_limits({.wavelength = 905 * nm, .duration = 1e-3, .repetition = -1}),
                    Error);
    CHECK_THROWS_AS((void)look_up_limits({.wavelength = 10.6e-6, .duration = 1e-3}), Error);
    CHECK_THROWS_AS((void)look_up_limits({.wavelength = 905 * nm, .duration = 0}), Error);
}

TEST_CASE("the caution says what it has to say") {
    for (const char* words :
         {"estimate", "early design", "nominal data", "not a laser classification", "no permission to expose",
          "measurement", "competent body", "IEC 60825-1", "local rules in force", "no aversion response",
          "local codes", "licensed practice", "memory", "purchased standard"})
        CHECK_MESSAGE(caution_paragraph.find(words) != std::string_view::npos, words);
    CHECK(caution_line.find("no laser classification") != std::string_view::npos);
    CHECK(caution_line.find('\n') == std::string_view::npos);
}
