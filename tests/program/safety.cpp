// glintplan safety as a user runs it.
#include "about.h"

#include "program/run.h"

#include <doctest/doctest.h>
#include <nlohmann/json.hpp>

using namespace glint::test;

namespace {

// A design of one's own with an entry of eye_safety.
std::string with_eye_safety(const Folder& folder, const std::string& inside) {
    folder.write("scene.xml", small_scene);
    return folder.write(
        "d.xml", replaced(small_design, "</design>", "<eye_safety>" + inside + "</eye_safety></design>"));
}

}  // namespace

TEST_CASE("safety prints one JSON object with the keys that are promised") {
    const Folder folder;
    const std::string design =
        with_eye_safety(folder, "<faults><zone_stuck_on/><over_current factor=\"2\"/></faults>");
    const Run asked = run("glintplan safety " + design + " --json");
    CHECK(asked.err.empty());
    const auto answer = nlohmann::json::parse(asked.out);
    for (const char* key :
         {"class", "worst_ratio", "margin", "governing", "criteria", "faults", "hazard_distance_m",
          "aided_hazard_distance_m", "largest_shot_energy_J", "largest_average_power_W", "caution"})
        CHECK_MESSAGE(answer.contains(key), key);
    REQUIRE(!answer["criteria"].empty());
    for (const char* key : {"criterion", "condition", "duration_s", "pulses", "C5", "C6", "subtense_rad",
                            "part_rad", "ae_J", "ael_J", "ratio", "zones", "eye_m", "focus_m"})
        CHECK_MESSAGE(answer["criteria"][0].contains(key), key);
    CHECK(answer["governing"] == answer["criteria"][0]);
    const double ratio =
        answer["governing"]["ae_J"].get<double>() / answer["governing"]["ael_J"].get<double>();
    CHECK(answer["governing"]["ratio"].get<double>() == about(ratio).epsilon(1e-12));
    CHECK(answer["worst_ratio"].get<double>() == about(ratio).epsilon(1e-12));
    CHECK(answer["margin"].get<double>() == about(1 - ratio).epsilon(1e-12));
    REQUIRE(answer["faults"].size() == 2);
    CHECK(answer["faults"][0]["name"] == "a zone stuck on");
    for (const char* key : {"name", "class", "worst_ratio", "reaction_time_s"})
        CHECK_MESSAGE(answer["faults"][1].contains(key), key);
    // Twice the power is twice the ratio; the coarse search of faults adds 10.5 % instead of 1.5 %.
    CHECK(answer["faults"][1]["worst_ratio"].get<double>() >= 2 * ratio);
    CHECK(answer["faults"][1]["worst_ratio"].get<double>() <= 2 * ratio * 1.105);
}

TEST_CASE("from 1250 nm to 1400 nm every verdict tells of the European limit that is missing") {
    const Folder folder;
    folder.write("scene.xml", small_scene);
    const auto at = [&](const std::string& wavelength) {
        std::string text =
            replaced(small_design, "wavelength=\"940 nm\"", "wavelength=\"" + wavelength + "\"");
        text = replaced(text, "center=\"940 nm\"", "center=\"" + wavelength + "\"");
        return folder.write("band.xml", text);
    };
    for (const char* wavelength : {"1250 nm", "1310 nm", "1400 nm"}) {
        CHECK(holds(run("glintplan safety " + at(wavelength)).out, "A11:2021"));
        const auto answer = nlohmann::json::parse(run("glintplan safety --json " + at(wavelength)).out);
        REQUIRE(answer["notes"].size() == 1);
        CHECK(holds(answer["notes"][0].get<std::string>(), "A11:2021"));
    }
    CHECK(!holds(run("glintplan safety " + at("1240 nm")).out, "A11:2021"));
}

TEST_CASE("the page begins with the caution and names what governs and every fault") {
    const Folder folder;
    const Run asked = run("glintplan safety " + with_eye_safety(folder, "<faults><all_zones/></faults>"));
    CHECK(asked.out.substr(0, 7) == "CAUTION");
    CHECK(holds(asked.out, "What governs"));
    CHECK(holds(asked.out, "Hazard distance"));
    CHECK(holds(asked.out, "All zones at once"));
}

TEST_CASE("status 1 when the class asked for does not hold") {
    const Folder folder;
    const std::string design = with_eye_safety(folder, "");
    CHECK(run("glintplan safety " + design + " --quiet --set drive/peak_power=\"1 mW\"").status == 0);
    CHECK(run("glintplan safety " + design + " --quiet --set drive/peak_power=\"1 kW\"").status == 1);
}

TEST_CASE("bad eye-safety input: status 2 with file, line and what would be accepted") {
    const Folder folder;
    const auto refused = [&](const std::string& inside, const std::string& message) {
        const Run bad = run("glintplan safety " + with_eye_safety(folder, inside));
        CHECK(bad.status == 2);
        CHECK(bad.out.empty());
        CHECK_MESSAGE(holds(bad.err, message), bad.err);
        CHECK(holds(bad.err, "d.xml:"));
    };
    refused("<faults><element_missing element=\"fan_out\"/></faults>",
            "an element that the optics do not hold");
    refused("<faults><pulse_too_long/></faults>", "factor");
    refused("<faults><pulse_too_long factor=\"0.5\"/></faults>", "0.5");
    refused("<faults><zone_stuck/></faults>", "zone_stuck_on");
    refused("<tolerances wavelength=\"5 kHz\"/>", "length");
    refused("<tolerances power=\"nan %\"/>", "nan");
}
