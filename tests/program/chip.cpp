// The chip as a user meets it: current, heat and drivers in the verdict, and what cannot be.
#include "about.h"

#include "program/run.h"

#include <doctest/doctest.h>
#include <fstream>
#include <nlohmann/json.hpp>

using namespace glint::test;

namespace {

// The small design driven in another way.
std::string driven(const Folder& folder, const std::string& drive) {
    folder.write("scene.xml", small_scene);
    return folder.write("d.xml",
                        replaced(small_design, "<drive peak_power=\"10 mW\" pulse_width=\"3 ns\"/>", drive));
}

nlohmann::json summary_of(const Folder& folder, const std::string& design, const std::string& more = "") {
    const Run asked = run("glintplan assess " + design + " --quiet --out " + folder.path("out") + " " + more);
    REQUIRE_MESSAGE(asked.status <= 1, asked.err);
    return nlohmann::json::parse(std::ifstream(folder.path("out/summary.json")));
}

}  // namespace

TEST_CASE("a power asked for is solved for its current, and that current gives the power") {
    const Folder folder;
    const auto by_power =
        summary_of(folder, driven(folder, "<drive by=\"power\" peak_power=\"10 mW\" pulse_width=\"3 ns\"/>"));
    CHECK(by_power["chip"]["peak_power_W"].get<double>() == about(10e-3).epsilon(1e-8));
    const double current = by_power["chip"]["current_A"].get<double>();
    const auto by_current =
        summary_of(folder, driven(folder, "<drive by=\"current\" current=\"" + std::to_string(current * 1e3) +
                                              " mA\" pulse_width=\"3 ns\"/>"));
    // Six decimals of the current in mA.
    CHECK(by_current["chip"]["peak_power_W"].get<double>() == about(10e-3).epsilon(1e-6));
    CHECK(by_current["chip"]["hottest_junction_K"].get<double>() > 298.15);
    CHECK(by_current["eye_safety"]["worst_ratio"].get<double>() ==
          about(by_power["eye_safety"]["worst_ratio"].get<double>()).epsilon(1e-5));
}

TEST_CASE("the verdict tells of current, heat and drivers") {
    const Folder folder;
    const std::string design = driven(
        folder,
        "<drive by=\"current\" current=\"20 mA\" pulse_width=\"3 ns\"><driver supply=\"3 V\"/></drive>");
    const Run asked = run("glintplan assess " + design);
    for (const char* part : {"Drivers   4 channels", "Diode     20 mA peak", "Heat ", "a channel",
                             "The driver cannot make this pulse"})
        CHECK_MESSAGE(holds(asked.out, part), part);
}

TEST_CASE("without a diode the light is as given, and nothing is said of heat") {
    const Folder folder;
    const std::string design = driven(folder, "<drive peak_power=\"10 mW\" pulse_width=\"3 ns\"/>");
    const Run asked = run("glintplan assess " + design);
    CHECK(holds(asked.out, "Drivers   4 channels"));
    CHECK(!holds(asked.out, "Heat "));
    const Run picture =
        run("glintplan preview " + design + " --view junction-map --out " + folder.path("x.png"));
    CHECK(picture.status == 2);
    CHECK(holds(picture.err, "accepted: drive by=\"current\" or by=\"power\""));
}

TEST_CASE("what a diode cannot do ends with status 2 and what it can") {
    const Folder folder;
    const auto refused = [&](const std::string& drive) {
        const Run asked = run("glintplan assess " + driven(folder, drive) + " --out " + folder.path("none"));
        CHECK(asked.status == 2);
        CHECK(asked.out.empty());
        CHECK(!std::filesystem::exists(folder.path("none")));
        return asked.err;
    };
    const std::string rollover = refused("<drive by=\"power\" peak_power=\"900 mW\" pulse_width=\"3 ns\"/>");
    CHECK(holds(rollover, "drive/peak_power: the diodes roll over at"));
    CHECK(holds(rollover, "more junctions or better cooling"));
    CHECK(holds(refused("<drive by=\"current\" current=\"0.1 mA\" pulse_width=\"3 ns\"/>"),
                "below the threshold of every emitter"));
    CHECK(holds(refused("<drive by=\"current\" pulse_width=\"3 ns\"/>"), "current"));
    CHECK(holds(refused("<drive by=\"current\" current=\"5 mA\" peak_power=\"1 mW\" pulse_width=\"3 ns\"/>"),
                "'peak_power' contradicts by=\"current\""));
    CHECK(holds(refused("<drive by=\"current\" current=\"5 A\" pulse_width=\"3 ns\"/>"), "d.xml"));
}

TEST_CASE("the same design gives the same bytes for any number of threads") {
    const Folder folder;
    const std::string design =
        driven(folder, "<drive by=\"power\" peak_power=\"12 mW\" pulse_width=\"3 ns\"/>");
    const std::string more = " --set firing/order=best --quiet --out ";
    CHECK(run("OMP_NUM_THREADS=1 glintplan assess " + design + more + folder.path("one")).status <= 1);
    CHECK(run("OMP_NUM_THREADS=3 glintplan assess " + design + more + folder.path("three")).status <= 1);
    CHECK(run("diff -r " + folder.path("one") + " " + folder.path("three")).status == 0);
}
