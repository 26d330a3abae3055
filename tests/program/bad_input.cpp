// Bad input: exit 2, a message with file, line and what would be accepted, and no output folder.
#include "program/run.h"

#include <doctest/doctest.h>
#include <fmt/format.h>
#include <filesystem>

using namespace glint::test;
namespace fs = std::filesystem;

namespace {

struct Case {
    std::string from, to;       // in the design
    std::string line, message;  // where, and a part of what is said
    std::string accepted = "accepted: ";
};

void refuse(const Folder& folder, const std::string& design, const std::string& where,
            const std::string& message, const std::string& accepted) {
    const Run refused = run("glintplan assess " + design + " --out " + folder.path("out"));
    CHECK_MESSAGE(refused.status == 2, message);
    CHECK_MESSAGE(holds(refused.err, where), refused.err);
    CHECK_MESSAGE(holds(refused.err, message), refused.err);
    CHECK_MESSAGE(holds(refused.err, accepted), refused.err);
    CHECK(refused.out.empty());
    CHECK(!fs::exists(folder.path("out")));
}

void refuse(const Case& each) {
    const Folder folder;
    folder.write("scene.xml", small_scene);
    const std::string design = folder.write("d.xml", replaced(small_design, each.from, each.to));
    refuse(folder, design, each.line.empty() ? "d.xml:" : "d.xml:" + each.line + ":", each.message,
           each.accepted);
}

void refuse_scene(const std::string& from, const std::string& to, const std::string& where,
                  const std::string& message, const std::string& accepted = "accepted: ") {
    const Folder folder;
    folder.write("scene.xml", replaced(small_scene, from, to));
    const std::string design = folder.write("d.xml", small_design);
    refuse(folder, design, where, message, accepted);
}

void refuse_mesh(const std::string& obj, const std::string& message) {
    const Folder folder;
    folder.write("m.obj", obj);
    folder.write("scene.xml", replaced(small_scene, "<plane/>", "<mesh file=\"m.obj\"/>"));
    refuse(folder, folder.write("d.xml", small_design), "m.obj:", message, "");
}

}  // namespace

TEST_CASE("unknown or misspelt field") {
    refuse({"peak_power", "peek_power", "7", "drive/peek_power: unknown field 'peek_power'",
            "nearest: peak_power"});
    refuse({"<firing", "<fireing", "8", "unknown element <fireing>", "nearest: firing"});
}

TEST_CASE("missing or wrong unit") {
    refuse({"pitch=\"40 um\"", "pitch=\"40\"", "3", "emitters/layout/pitch: '40' lacks a unit",
            "accepted: a length from 100 nm to 10 mm (nm, um, mm, cm, m, km)"});
    refuse({"pitch=\"40 um\"", "pitch=\"40 ns\"", "3", "'40 ns' is a time, not a length"});
}

TEST_CASE("value out of range") {
    refuse({"pitch=\"40 um\"", "pitch=\"40 m\"", "3", "'40 m' is out of range"});
    refuse({"shots=\"50\"", "shots=\"0\"", "8", "'0' is out of range",
            "accepted: a whole number from 1 to 100000000"});
}

TEST_CASE("NaN and infinity") {
    refuse({"\"10 mW\"", "\"nan mW\"", "7", "'nan mW' is not a number with a unit"});
    refuse({"\"10 mW\"", "\"inf W\"", "7", "'inf W' is not a number with a unit"});
    refuse({"\"10 mW\"", "\"1e400 W\"", "7", "beyond what a number can hold"});
}

TEST_CASE("missing file") {
    const Folder folder;
    const Run none = run("glintplan assess " + folder.path("none.xml") + " --out " + folder.path("out"));
    CHECK(none.status == 2);
    CHECK(holds(none.err, "none.xml: no such file"));
    CHECK(!fs::exists(folder.path("out")));
    refuse({"scene=\"scene.xml\"", "scene=\"other.xml\"", "16", "other.xml: no such file", ""});
    refuse(
        {"<layout kind=\"grid\" rows=\"8\" columns=\"8\" pitch=\"40 um\"/>\n    <addressing "
         "scheme=\"blocks\" rows=\"2\" columns=\"2\"/>",
         "<layout kind=\"list\" file=\"none.csv\"/>", "3", "none.csv: no such file", ""});
    refuse_scene("<plane/>", "<mesh file=\"none.obj\"/>", "none.obj", "no such file", "");
}

TEST_CASE("broken XML") {
    refuse({"</receiver>", "", "", "not well-formed XML", "accepted: an XML file with root <design>"});
    refuse_scene("</scene>", "", "scene.xml:", "not well-formed XML",
                 "accepted: an XML file with root <scene>");
}

TEST_CASE("mesh with indices out of range, and empty meshes") {
    refuse_mesh("v 0 0 0\nv 1 0 0\nv 0 1 0\nf 1 2 9\n", "vertex 9 does not exist");
    refuse_mesh("v 0 0 0\nv 1 0 0\nv 0 1 0\nf -9 2 3\n", "vertex -9 does not exist");
    refuse_mesh("", "no triangle");
    refuse_mesh("v 0 0 0\n", "no triangle");
    refuse_mesh("v nan 0 0\nv 1 0 0\nv 0 1 0\nf 1 2 3\n", "m.obj");
}

TEST_CASE("zone pattern that does not divide the array") {
    refuse({"scheme=\"blocks\" rows=\"2\"", "scheme=\"blocks\" rows=\"3\"", "4",
            "3 rows of zones do not divide the 8 rows of emitters", "accepted: a divisor of 8"});
}

TEST_CASE("receiver that sees nothing") {
    refuse({"<placement scene=\"scene.xml\" z=\"1 m\"/>",
            "<placement scene=\"scene.xml\" z=\"1 m\" elevation=\"80 deg\"/>", "16",
            "the receiver sees nothing"});
    // A ring so wide that no light falls into the narrow field of the receiver.
    const Folder folder;
    folder.write("scene.xml", small_scene);
    std::string ring = replaced(small_design, "<lobe divergence=\"20 deg\"/>",
                                "<lobe shape=\"ring\" divergence=\"1 deg\" ring=\"90 deg\"/>");
    ring = replaced(
        ring, "<optics><lens focal_length=\"1 mm\" clear_aperture=\"2 mm\" defocus=\"100 um\"/></optics>",
        "");
    refuse(folder, folder.write("d.xml", ring),
           "d.xml:11:", "the receiver sees nothing: no zone lights any part of its field", "accepted: ");
}

TEST_CASE("two fields that contradict each other") {
    refuse({"gate=\"30 m\"", "gate=\"300 m\"", "14", "the next shot leaves after 1 us"});
    refuse({"center=\"940 nm\"", "center=\"850 nm\"", "13",
            "the filter passes 840 nm to 860 nm, the emitters send 940 nm"});
    refuse({"repetition=\"1 MHz\"", "repetition=\"1 MHz\" frame_period=\"10 us\"", "8",
            "the frame lasts 10 us, but its 4 dwells take 200 us"});
    refuse({"kind=\"grid\"", "kind=\"hexagonal\" row_pitch=\"50 um\"", "3",
            "'row_pitch' contradicts kind=\"hexagonal\""});
}

TEST_CASE("every problem of a file is named in one go") {
    const Folder folder;
    std::string text = replaced(small_design, "\"40 um\"", "\"40\"");
    text = replaced(text, "shots=\"50\"", "shots=\"many\"");
    text = replaced(text, "<environment source=\"sun\"", "<environment source=\"moon\"");
    const Run refused = run("glintplan assess " + folder.write("d.xml", text));
    CHECK(refused.status == 2);
    CHECK(holds(refused.err, "d.xml:3:"));
    CHECK(holds(refused.err, "d.xml:8:"));
    CHECK(holds(refused.err, "d.xml:17:"));
}

TEST_CASE("scene files are checked as strictly") {
    refuse_scene("reflectance=\"60 %\"", "reflectance=\"160 %\"", "scene.xml:2:", "'160 %' is out of range");
    refuse_scene("material=\"paint\"><plane", "material=\"pant\"><plane",
                 "scene.xml:3:", "no material 'pant' stands above", "accepted: paint");
    refuse_scene("<plane/>", "", "scene.xml:3:", "the object has no shape",
                 "accepted: box, sphere, cylinder, plane or mesh");
    refuse_scene("<plane/>", "<plane normal_z=\"0\"/>", "scene.xml:3:", "a plane without a normal");
    refuse_scene(" size_x=\"0.1 m\"", "", "scene.xml:4:", "missing field 'size_x'");
}

TEST_CASE("a requirement on an object that is not there") {
    refuse({"object=\"wall\"", "object=\"door\"", "21", "the scene has no object 'door'",
            "accepted: floor or wall"});
}

TEST_CASE("bad usage") {
    for (const char* command : {"glintplan", "glintplan fly", "glintplan assess",
                                "glintplan assess x.xml --threads 0", "glintplan limits --wavelength 905nm"})
        CHECK_MESSAGE(run(command).status == 2, command);
    const Run help = run("glintplan --help");
    CHECK(help.status == 0);
    CHECK(holds(help.out, "CAUTION"));
    CHECK(run("glintplan assess --help").status == 0);
    CHECK(run("glintplan --version").out == "glintplan 0.1.0\n");
}
