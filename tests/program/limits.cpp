// glintplan limits and fields as a user runs them.
#include "about.h"

#include "program/run.h"

#include <doctest/doctest.h>
#include <nlohmann/json.hpp>

using namespace glint::test;

TEST_CASE("limits prints one JSON object with SI units in the keys") {
    const Run asked = run("glintplan limits --wavelength 905nm --duration 5ns --repetition 10kHz --json");
    REQUIRE(asked.status == 0);
    const auto answer = nlohmann::json::parse(asked.out);
    // 905 nm, 5 ns, 10 kHz, derived from the 2014 rules: C5 = 0.4 at N = 1e5; single 1.9792e-7,
    // train 7.9168e-8 J.
    CHECK(answer["wavelength_m"] == about(905e-9));
    CHECK(answer["single_energy_J"].get<double>() == about(1.9792e-7).epsilon(1e-4));
    CHECK(answer["train_energy_J"].get<double>() == about(7.9168e-8).epsilon(1e-4));
    CHECK(answer["average_energy_J"].get<double>() == about(1.0025e-7).epsilon(1e-4));
    CHECK(answer["N"].get<double>() == about(1e5));
    CHECK(answer["C5"].get<double>() == about(0.4));
    CHECK(answer["governs"] == "train");
    for (const char* key :
         {"duration_s", "subtense_rad", "C4", "C6", "C7", "T2_s", "alpha_max_rad", "class1_energy_J",
          "class1_power_W", "class3R_energy_J", "class3B_energy_J", "caution"})
        CHECK_MESSAGE(answer.contains(key), key);
}

TEST_CASE("limits prints a table with the caution at its head") {
    const Run asked = run("glintplan limits --wavelength 940nm --duration 100s --subtense 10mrad");
    CHECK(asked.status == 0);
    CHECK(holds(asked.out, "CAUTION"));
    CHECK(holds(asked.out, "Class 1"));
}

TEST_CASE("limits names every bad option") {
    const Run bad = run("glintplan limits --wavelength 905 --duration 5m --subtense 1deg");
    CHECK(bad.status == 2);
    CHECK(holds(bad.err, "--wavelength: '905' lacks a unit; accepted: a length in nm"));
    CHECK(holds(bad.err, "--duration: '5m' is a length, not a time"));
    CHECK(run("glintplan limits --wavelength 3um --duration 1s").status == 2);
    CHECK(run("glintplan limits --wavelength 905nm --duration 1ms --repetition 10kHz").status == 2);
}

TEST_CASE("fields lists, narrows down and refuses") {
    CHECK(holds(run("glintplan fields").out, "emitters/layout/pitch"));
    CHECK(holds(run("glintplan fields drive/pulse_width").out, "a time from 10 ps to 1 s"));
    const Run unknown = run("glintplan fields drive/pulse_with");
    CHECK(unknown.status == 2);
    CHECK(holds(unknown.err, "accepted: drive/pulse_width"));
}

TEST_CASE("the schemas are accepted by xmllint and accept every example and scene") {
    const Folder folder;
    for (const char* kind : {"", "--scene"}) {
        const std::string schema = folder.path("schema.xsd");
        REQUIRE(run(std::string("glintplan fields --schema ") + kind + " > " + schema).status == 0);
        const std::string files = *kind == '\0' ? "examples/*.xml" : "scenes/*.xml";
        const Run valid = run("xmllint --noout --schema " + schema + " " + files);
        CHECK_MESSAGE(valid.status == 0, valid.err);
        CHECK(holds(valid.err, " validates"));
    }
    const std::string wrong = folder.write("d.xml", replaced(small_design, "\"40 um\"", "\"40\""));
    REQUIRE(run("glintplan fields --schema > " + folder.path("s.xsd")).status == 0);
    CHECK(run("xmllint --noout --schema " + folder.path("s.xsd") + " " + wrong).status != 0);
}

TEST_CASE("the field reference in docs is current") {
    const Run current =
        run("{ glintplan fields --markdown; } | diff - <(sed '1,/^<!-- generated/d' docs/fields.md | sed "
            "'/^<!-- scene files/,$d')");
    CHECK_MESSAGE(current.status == 0, current.out);
    const Run scene = run(
        "{ glintplan fields --scene --markdown; } | diff - <(sed '1,/^<!-- scene files/d' docs/fields.md)");
    CHECK_MESSAGE(scene.status == 0, scene.out);
}
