// The page of the limit tables: JSON keys, numbers, widths.
#include <glint/report/limits_page.h>
#include <glint/safety/caution.h>

#include <doctest/doctest.h>
#include <nlohmann/json.hpp>
#include <sstream>
#include <string>

using namespace glint;
using nlohmann::json;

TEST_CASE("limits as JSON carry every value with its unit in the key") {
    const LimitsAnswer answer = look_up_limits({.wavelength = 905e-9, .duration = 5e-9, .repetition = 1e6});
    const json page = json::parse(limits_json(answer));
    CHECK(page["caution"] == std::string(caution_paragraph));
    CHECK(page["wavelength_m"] == 905e-9);
    CHECK(page["duration_s"] == 5e-9);
    CHECK(page["subtense_rad"] == 1.5e-3);
    CHECK(page["C4"] == *answer.C4);
    CHECK(page["C6"] == 1.0);
    CHECK(page["C7"] == 1.0);
    CHECK(page["T2_s"] == 10.0);
    CHECK(page["alpha_max_rad"] == 5e-3);
    CHECK(page["class1_energy_J"] == answer.class_1.energy);
    CHECK(page["class1_power_W"] == answer.class_1.power);
    CHECK(page["class3R_energy_J"] == answer.class_3R.energy);
    CHECK(page["class3B_energy_J"] == answer.class_3B.energy);
    CHECK(page["N"] == answer.train->N);
    CHECK(page["C5"] == 0.4);
    CHECK(page["single_energy_J"] == answer.train->single);
    CHECK(page["average_energy_J"] == answer.train->average);
    CHECK(page["group_energy_J"] == *answer.train->group);
    CHECK(page["train_energy_J"] == *answer.train->train);
    CHECK(page["governs"] == "average");
    CHECK(limits_json(answer).back() == '\n');
}

TEST_CASE("JSON has null where a value does not apply and no pulse keys without a repetition") {
    const json steady = json::parse(limits_json(look_up_limits({.wavelength = 905e-9, .duration = 1})));
    for (const char* key :
         {"N", "C5", "single_energy_J", "average_energy_J", "group_energy_J", "train_energy_J", "governs"})
        CHECK_MESSAGE(!steady.contains(key), key);
    const json corneal =
        json::parse(limits_json(look_up_limits({.wavelength = 1550e-9, .duration = 5e-9, .repetition = 10})));
    for (const char* key : {"C4", "C6", "C7", "T2_s", "alpha_max_rad", "C5", "train_energy_J"})
        CHECK_MESSAGE(corneal.at(key).is_null(), key);
}

TEST_CASE("limits as text stay within 80 columns and start with the caution") {
    const LimitsQuery queries[] = {
        {.wavelength = 905e-9, .duration = 5e-9, .subtense = 30e-3, .repetition = 1e6, .pulses = 1000},
        {.wavelength = 450e-9, .duration = 5, .subtense = 80e-3},
        {.wavelength = 1300e-9, .duration = 100, .subtense = 0.1},
        {.wavelength = 1550e-9, .duration = 5e-9, .repetition = 1e5},
    };
    for (const LimitsQuery& query : queries) {
        const std::string page = limits_text(look_up_limits(query));
        CHECK(page.rfind("CAUTION.", 0) == 0);
        std::istringstream lines(page);
        for (std::string line; std::getline(lines, line);) {
            CHECK_MESSAGE(line.size() <= 80, line);
            CHECK_MESSAGE((line.empty() || line.back() != ' '), line);
        }
        // Wrapping loses no word of the caution.
        std::string joined;
        for (const char c : page) joined += c == '\n' ? ' ' : c;
        CHECK(joined.find(caution_paragraph) != std::string::npos);
    }
    const std::string page = limits_text(look_up_limits(queries[0]));
    CHECK(page.find("905 nm") != std::string::npos);
    CHECK(page.find("30 mrad") != std::string::npos);
    CHECK(page.find("governed by") != std::string::npos);
    CHECK(limits_text(look_up_limits(queries[3])).find("does not apply") != std::string::npos);
}
