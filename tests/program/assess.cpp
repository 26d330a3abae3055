// glintplan assess as a user runs it.
#include "about.h"

#include "program/run.h"
#include "report/png_reader.h"

#include <doctest/doctest.h>
#include <algorithm>
#include <filesystem>
#include <fstream>
#include <nlohmann/json.hpp>
#include <sstream>

using namespace glint::test;
namespace fs = std::filesystem;

namespace {

std::string content(const std::string& path) {
    std::ifstream stream(path, std::ios::binary);
    std::ostringstream text;
    text << stream.rdbuf();
    return text.str();
}

// What tests/run.sh fetched for the tests.
std::string test_data(const std::string& name) {
    const char* folder = std::getenv("GLINT_TEST_DATA");
    REQUIRE_MESSAGE(folder != nullptr, "GLINT_TEST_DATA is not set: run the tests with bash tests/run.sh");
    return std::string(folder) + "/" + name;
}

}  // namespace

TEST_CASE("assess writes every file, prints the verdict, and says with its status whether all is met") {
    const Folder folder;
    folder.write("scene.xml", small_scene);
    const std::string design = folder.write("d.xml", small_design), out = folder.path("out");
    const Run met = run("glintplan assess " + design + " --out " + out);
    CHECK_MESSAGE(met.status == 0, met.err);
    CHECK(holds(met.out, "CAUTION"));
    CHECK(holds(met.out, "Every requirement is met."));
    for (const char* name :
         {"summary.json", "zones.csv", "points.ply", "preview-points.png", "preview-zones.png"})
        CHECK(fs::file_size(out + "/" + name) > 200);
    const auto summary = nlohmann::json::parse(content(out + "/summary.json"));
    CHECK(summary["all_requirements_met"] == true);
    CHECK(holds(summary["caution"], "no permission to expose"));
    CHECK(summary["requirements"].size() == 3);
    CHECK(summary["requirements"][0]["got_m"] > 1);
    CHECK(summary["ranging"]["points"] > 100);
    const std::string zones = content(out + "/zones.csv");
    CHECK(std::count(zones.begin(), zones.end(), '\n') == 5);

    const Run unmet =
        run("glintplan assess " + design + " --set 'requirements/range/distance=900 m' --quiet");
    CHECK(unmet.status == 1);
    CHECK(unmet.out.empty());
}

TEST_CASE("the verdict fits 80 columns") {
    const Folder folder;
    folder.write("scene.xml", small_scene);
    const Run verdict = run("glintplan assess " + folder.write("d.xml", small_design));
    std::istringstream lines(verdict.out);
    for (std::string line; std::getline(lines, line);) CHECK_MESSAGE(line.size() <= 80, line);
}

TEST_CASE("the same bytes come out for 1, 2 and 3 threads, and in a locale with a decimal comma") {
    const Folder folder;
    folder.write("scene.xml", small_scene);
    const std::string design = folder.write("d.xml", small_design);
    for (const char* n : {"1", "2", "3"})
        CHECK(run("glintplan assess " + design + " --quiet --threads " + n + " --out " + folder.path(n))
                  .status == 0);
    CHECK(run("LC_ALL=de_DE.UTF-8 glintplan assess " + design + " --quiet --out " + folder.path("comma"))
              .status == 0);
    for (const char* name :
         {"summary.json", "zones.csv", "points.ply", "preview-points.png", "preview-zones.png"}) {
        const std::string one = content(folder.path("1") + "/" + name);
        CHECK(one == content(folder.path("2") + "/" + name));
        CHECK(one == content(folder.path("3") + "/" + name));
        CHECK(one == content(folder.path("comma") + "/" + name));
    }
}

TEST_CASE("energy closes: emitted = in the beams + named losses, in the beams = landed + escaped") {
    const Folder folder;
    folder.write("scene.xml", small_scene);
    REQUIRE(run("glintplan assess " + folder.write("d.xml", small_design) + " --quiet --out " +
                folder.path("out"))
                .status == 0);
    const auto light = nlohmann::json::parse(content(folder.path("out") + "/summary.json"))["light"];
    double lost = 0;
    for (const auto& loss : light["losses"]) lost += loss["power_W"].get<double>();
    CHECK(light["in_beams_W"].get<double>() + lost ==
          about(light["emitted_peak_W"].get<double>()).epsilon(1e-3));
    CHECK(light["landed_on_scene_W"].get<double>() + light["escaped_W"].get<double>() ==
          about(light["in_beams_W"].get<double>()).epsilon(1e-3));
}

TEST_CASE("an independent reader from the npm registry reads the PLY") {
    // @loaders.gl/ply; tests/run.sh installs it and names the folder.
    const std::string node = test_data("node");
    const Folder folder;
    folder.write("scene.xml", small_scene);
    REQUIRE(run("glintplan assess " + folder.write("d.xml", small_design) + " --quiet --out " +
                folder.path("out"))
                .status == 0);
    fs::copy_file(GLINT_SOURCE_DIR "/tests/program/read-ply.mjs", node + "/read-ply.mjs",
                  fs::copy_options::overwrite_existing);
    const Run read = run("node '" + node + "/read-ply.mjs' " + folder.path("out") + "/points.ply");
    REQUIRE_MESSAGE(read.status == 0, read.err);
    const auto ply = nlohmann::json::parse(read.out);
    const auto summary = nlohmann::json::parse(content(folder.path("out") + "/summary.json"));
    CHECK(ply["count"] == summary["ranging"]["points"]);
    CHECK(ply["names"] == nlohmann::json({"POSITION", "range", "signal", "precision", "probability", "zone",
                                          "column", "row", "object"}));
    CHECK(ply["low"][2].get<double>() >= -1e-3);                       // nothing below the floor
    CHECK(ply["high"][0].get<double>() == about(1.95).epsilon(1e-3));  // the face of the wall
}

TEST_CASE("a bunny from the npm registry is cast and seen") {
    const Folder folder;
    // The mesh is about 16 units high and has y up; here it stands 1.6 m high on the floor, 3.5 m away.
    const std::string mesh =
        "<mesh file=\"" + test_data("bunny.obj") + "\" up=\"y\" scale=\"0.1\" x=\"3.5 m\" turn=\"-60 deg\"/>";
    const std::string wall =
        "<object name=\"wall\" material=\"paint\"><box x=\"2 m\" z=\"1 m\" size_x=\"0.1 m\" size_y=\"4 m\" "
        "size_z=\"2 m\"/>";
    folder.write("scene.xml",
                 replaced(small_scene, wall, "<object name=\"bunny\" material=\"paint\">" + mesh));
    std::string design = replaced(small_design, "object=\"wall\"", "object=\"bunny\"");
    design = replaced(design, "columns=\"24\" rows=\"24\" pitch=\"25 um\"",
                      "columns=\"96\" rows=\"96\" pitch=\"12 um\"");
    design = replaced(design, "focal_length=\"1 mm\" clear_aperture=\"2 mm\"",
                      "focal_length=\"0.5 mm\" clear_aperture=\"1 mm\"");
    const Run seen = run("glintplan assess " + folder.write("d.xml", replaced(design, "10 mW", "2 W")) +
                         " --out " + folder.path("out"));
    CHECK_MESSAGE((seen.status == 0 || seen.status == 1), seen.err);
    const auto summary = nlohmann::json::parse(content(folder.path("out") + "/summary.json"));
    int on_bunny = 0;
    for (const auto& object : summary["ranging"]["objects"])
        if (object["name"] == "bunny") on_bunny = object["points"];
    CHECK(on_bunny > 1000);
    // Seen in the picture: coloured pixels beside the colour bar, as many as that many points must cover.
    const ReadPicture picture = read_png(content(folder.path("out") + "/preview-points.png"));
    REQUIRE(picture.width == 2560);
    int coloured = 0;
    for (int y = 0; y < picture.height; ++y)
        for (int x = 0; x < picture.width * 9 / 10; ++x) {
            const unsigned char* pixel =
                &picture.pixels[(static_cast<std::size_t>(y) * picture.width + x) * 3];
            const auto [low, high] = std::minmax({pixel[0], pixel[1], pixel[2]});
            coloured += high - low > 60;
        }
    CHECK(coloured > 20 * on_bunny);
}

TEST_CASE("preview draws one view, and says which there are") {
    const Folder folder;
    folder.write("scene.xml", small_scene);
    const std::string design = folder.write("d.xml", small_design);
    CHECK(run("glintplan preview " + design + " --view zones --quiet --out " + folder.path("z.png")).status ==
          0);
    CHECK(content(folder.path("z.png")).substr(1, 3) == "PNG");
    const Run wrong =
        run("glintplan preview " + design + " --view sideways --quiet --out " + folder.path("n.png"));
    CHECK(wrong.status == 2);
    CHECK(holds(wrong.err,
                "there is no view 'sideways'; accepted: points, zones, retinal-image, emission-limits, "
                "safety-map, firing-times or junction-map"));
    CHECK(!fs::exists(folder.path("n.png")));
}
