// Reading OBJ files, good and bad; moving meshes; cutting polygons.
#include "about.h"

#include "scene/support.h"

#include <glint/core/error.h>
#include <glint/scene/polygon.h>

#include <doctest/doctest.h>
#include <unistd.h>
#include <filesystem>
#include <fstream>

using namespace glint;
using namespace glint::testing;
namespace fs = std::filesystem;

namespace {

// A file that lasts as long as the test.
struct TemporaryFile {
    fs::path path;
    explicit TemporaryFile(const std::string& content)
        : path(fs::temp_directory_path() / ("glint-mesh-" + std::to_string(::getpid()) + ".obj")) {
        std::ofstream(path, std::ios::binary) << content;
    }
    ~TemporaryFile() {
        std::error_code ignored;
        fs::remove(path, ignored);
    }
};

Mesh read(const std::string& content) { return read_obj(TemporaryFile(content).path); }

std::vector<Problem> problems_in(const std::string& content) {
    const TemporaryFile file(content);
    try {
        (void)read_obj(file.path);
    } catch (const Error& error) {
        for (const Problem& problem : error.problems()) CHECK(problem.file == file.path.string());
        CHECK(error.blame() == Blame::input);
        return error.problems();
    }
    return {};
}

double area_of(const Mesh& mesh) {
    double area = 0;
    for (const auto& [a, b, c] : mesh.triangles)
        area += 0.5 * (mesh.vertices[b] - mesh.vertices[a]).cross(mesh.vertices[c] - mesh.vertices[a]).norm();
    return area;
}

const std::string square = "v 0 0 0\nv 1 0 0\nv 1 1 0\nv 0 1 0\n";

}  // namespace

TEST_CASE("OBJ: vertices and triangles as written") {
    const Mesh mesh = read("# a corner\nv 0 0 0\nv 1.5 0 -2e-3 # beside\n\n  v\t0 .25 +1\nf 1 2 3\n");
    REQUIRE(mesh.vertices.size() == 3);
    // The parser adds digits up in double: the last place may differ.
    CHECK((mesh.vertices[1] - Vec3(1.5, 0, -2e-3)).norm() < 1e-15);
    CHECK((mesh.vertices[2] - Vec3(0, 0.25, 1)).norm() < 1e-15);
    REQUIRE(mesh.triangles.size() == 1);
    CHECK(mesh.triangles[0] == std::array{0, 1, 2});
}

TEST_CASE("OBJ: coordinates keep double precision") {
    const Mesh mesh = read("v 1000.123456789012 0 0\nv 0 1 0\nv 0 0 1\nf 1 2 3\n");
    CHECK(std::abs(mesh.vertices[0].x() - 1000.123456789012) < 1e-12);  // single precision: 6e-5
}

TEST_CASE("OBJ: every way to write a corner, groups, line ends and what is passed over") {
    const std::string lines[] = {
        "f 1 2 3\n",    "f 1/1 2/1 3/1\n", "f 1//1 2//1 3//1\n",  "f 1/1/1 2/1/1 3/1/1\n",
        "f -4 -3 -2\n", "f 1 2 3\r\n",     "f 1 2 3 # comment\n", "f\t1  2\t3",
        "f 1 2 3\r"};
    for (const std::string& face : lines) {
        const Mesh mesh = read("mtllib none.mtl\no thing\nvt 0 0\nvn 0 0 1\n" + square +
                               "g a b\nusemtl red\ns 1\ns off\nl 1 2\np 1\n" + face);
        const bool same = mesh.triangles == std::vector<std::array<int, 3>>{{0, 1, 2}};
        CHECK_MESSAGE(same, face);
    }
    // Faces ahead of their vertices, colours after coordinates, several groups.
    CHECK(read("f 1 2 3\n" + square).triangles.size() == 1);
    CHECK(read("v 0 0 0 1 0 0\nv 1 0 0 0 1 0\nv 0 1 0 0 0 1\nf 1 2 3\n").vertices.size() == 3);
    CHECK(read(square + "g one\nf 1 2 3\ng two\nf 1 3 4\no three\nusemtl x\nf 2 3 4\nusemtl y\nf 1 2 4\n")
              .triangles.size() == 4);
    CHECK(read("v 0 0 0\rv 1 0 0\rv 0 1 0\rf 1 2 3\r").triangles.size() == 1);
}

TEST_CASE("OBJ: polygons are cut, also when they are not convex or lie far out") {
    CHECK(read(square + "f 1 2 3 4\n").triangles.size() == 2);
    CHECK(area_of(read(square + "f 1 2 3 4\n")) == about(1).epsilon(1e-15));
    // An arrow head: the shorter diagonal lies outside it.
    const std::string arrow = "v 0 0 0\nv 1 -1 0\nv 0.5 0 0\nv 1 1 0\n";
    CHECK(area_of(read(arrow + "f 1 2 3 4\n")) == about(0.5).epsilon(1e-15));
    CHECK(area_of(read(arrow + "f 4 3 2 1\n")) == about(0.5).epsilon(1e-15));
    // An L of six corners, standing up, 1 km away, both ways round.
    const std::string el =
        "v 7 1000 1000\nv 7 1002 1000\nv 7 1002 1001\nv 7 1001 1001\nv 7 1001 1002\nv 7 1000 1002\n";
    CHECK(area_of(read(el + "f 1 2 3 4 5 6\n")) == about(3).epsilon(1e-12));
    CHECK(area_of(read(el + "f 6 5 4 3 2 1\n")) == about(3).epsilon(1e-12));
    CHECK(area_of(read(el + "f 3 4 5 6 1 2\n")) == about(3).epsilon(1e-12));
}

TEST_CASE("OBJ: what is wrong is said with file and line") {
    const auto only = [](const std::string& content, int line, const std::string& what) {
        const std::vector<Problem> problems = problems_in(content);
        REQUIRE_MESSAGE(problems.size() == 1, content);
        CHECK_MESSAGE(problems[0].what == what, content);
        CHECK_MESSAGE(problems[0].line == line, content);
    };
    only(square, 0, "there are no triangles");
    only("", 0, "there are no triangles");
    only("# nothing\n", 0, "there are no triangles");
    only(square + "l 1 2\n", 0, "there are no triangles");
    only("v nan 0 0\nv 1 0 0\nv 0 1 0\nf 1 2 3\n", 1, "'nan' is not a finite number");
    only("v 0 0 0\nv 1 inf 0\nv 0 1 0\nf 1 2 3\n", 2, "'inf' is not a finite number");
    only("v 0 0 0\nv 1 -1e999 0\nv 0 1 0\nf 1 2 3\n", 2, "'-1e999' is not a finite number");
    only("v 0 0 0\nv 1 0,5 0\nv 0 1 0\nf 1 2 3\n", 2, "'0,5' is not a finite number");
    only("v 0 0 0\nv 1 0\nv 0 1 0\nf 1 2 3\n", 2, "a vertex of 2 numbers");
    only(square + "f 1 2 5\n", 5, "vertex 5 does not exist");
    only(square + "f 1 2 -5\n", 5, "vertex -5 does not exist");
    only("v 0 0 0\nv 1 0 0\nf -1 -2 -3\nv 0 1 0\n", 3, "vertex -3 does not exist");
    only(square + "f 1 2 99999999999999\n", 5, "vertex 99999999999999 does not exist");
    only(square + "f 0 1 2\n", 5, "'0' is not a corner of a face");
    only(square + "f 1 2 x\n", 5, "'x' is not a corner of a face");
    only(square + "f 1 2 3.5\n", 5, "'3.5' is not a corner of a face");
    only(square + "f 1/ 2 3\n", 5, "'1/' is not a corner of a face");
    only(square + "f 1/1/1/1 2 3\n", 5, "'1/1/1/1' is not a corner of a face");
    only(square + "f 1 2\n", 5, "a face of 2 corners");
    only(square + "f\n", 5, "a face of 0 corners");
    only(square + "f 1 2 3\nsurf 0 1 0 1 1 2 3\n", 6, "unknown or unsupported statement 'surf'");
    only(square + "f 1 2 3\nface 1 2 3\n", 6, "unknown or unsupported statement 'face'");
    only(square + "f 1 2 \\\n", 5, "'\\' is not a corner of a face");
    only(square + "f 1 3 2 4\n", 0, "the face of vertices 1 3 2 4 has no area or crosses itself");
    std::string many = square + "f";
    for (int i = 0; i < 256; ++i) many += " 1";
    only(many + "\n", 5, "a face of 256 corners");
}

TEST_CASE("OBJ: all problems are reported, up to a limit") {
    const std::vector<Problem> several = problems_in("v nan 0 0\nv 1 0 x\nv 0 1 0\nf 1 2 9\nwhat is this\n");
    REQUIRE(several.size() == 4);
    CHECK(several[0].line == 1);
    CHECK(several[1].line == 2);
    std::string binary;
    RandomStream random(9);
    for (int i = 0; i < 20000; ++i) binary += static_cast<char>(random.below(256));
    const std::vector<Problem> flood = problems_in(binary);
    REQUIRE(flood.size() == 21);
    CHECK(flood.back().what == "there are more problems after these");
    for (const Problem& problem : flood)
        for (const char c : problem.what) CHECK((c >= ' ' && c <= '~'));
}

TEST_CASE("OBJ: a missing file and a folder are named") {
    CHECK_THROWS_WITH_AS((void)read_obj("/nowhere/at/all.obj"), doctest::Contains("/nowhere/at/all.obj"),
                         Error);
    CHECK_THROWS_WITH_AS((void)read_obj("/tmp"), doctest::Contains("/tmp"), Error);
}

TEST_CASE("OBJ: no file of random statements crashes the reader or gives a bad mesh") {
    const std::string words[] = {"v",   "f",   "vt", "vn",     "1",  "2",  "-1", "3/1", "4//2", "0",
                                 "1e5", "nan", "\n", "\n",     "\n", " ",  "#",  "g",   "-3",   "0.5",
                                 "/",   "s",   "o",  "usemtl", "\r", "\t", "5",  "l"};
    RandomStream random(10);
    int read_well = 0, refused = 0;
    for (int i = 0; i < 3000; ++i) {
        std::string text = "v 0 0 0\nv 1 0 0\nv 0 1 0\n";
        const int length = static_cast<int>(random.below(40));
        for (int k = 0; k < length; ++k) text += words[random.below(std::size(words))] + " ";
        text += "\nf 1 2 3\n";
        try {
            const Mesh mesh = read(text);
            ++read_well;
            for (const auto& triangle : mesh.triangles)
                for (const int corner : triangle)
                    if (corner < 0 || corner >= static_cast<int>(mesh.vertices.size())) FAIL("bad corner");
        } catch (const Error&) {
            ++refused;
        }
    }
    CHECK(read_well > 100);
    CHECK(refused > 100);
}

TEST_CASE("transformed meshes: volume scales with the determinant, triangles stay") {
    const Mesh unit = ball(2);
    const auto volume = [](const Mesh& mesh) {
        double sum = 0;
        for (const auto& [a, b, c] : mesh.triangles)
            sum += mesh.vertices[a].dot(mesh.vertices[b].cross(mesh.vertices[c])) / 6;
        return sum;
    };
    Mat3 linear;
    linear << 2, 1, 0, 0, 3, 0, 0, 0, -0.5;
    const Mesh moved = transformed(unit, linear, {10, 20, 30});
    CHECK(moved.triangles == unit.triangles);
    CHECK(volume(moved) == about(-3 * volume(unit)).epsilon(1e-12));
    CHECK((moved.vertices[7] - (linear * unit.vertices[7] + Vec3(10, 20, 30))).norm() < 1e-14);
}

TEST_CASE("cut polygons keep their area, whatever their outline and pose") {
    RandomStream random(21);
    int checked = 0;
    for (int i = 0; i < 2000; ++i) {
        // Star-shaped outlines, convex or not: corners in order of angle at random radii.
        const int corners = 3 + static_cast<int>(random.below(30));
        const Mat3 pose = random_rotation(random) * std::pow(10.0, between(random, -4, 3));
        const Vec3 offset = random_place(random, 100);
        std::vector<Vec3> outline;
        double area = 0, last_x = 0, last_y = 0, first_x = 0, first_y = 0;
        for (int k = 0; k < corners; ++k) {
            const double angle = 2 * pi * (k + 0.8 * random.uniform()) / corners,
                         radius = between(random, 0.2, 1);
            const double x = radius * std::cos(angle), y = radius * std::sin(angle);
            if (k == 0) first_x = x, first_y = y;
            if (k > 0) area += 0.5 * (last_x * y - last_y * x);
            last_x = x, last_y = y;
            outline.push_back(pose * Vec3(x, y, 0));
        }
        area += 0.5 * (last_x * first_y - last_y * first_x);
        if (!(area > 0.01)) continue;
        ++checked;
        Mesh mesh{.vertices = outline, .triangles = cut_polygon(outline)};
        const double scale = pose.col(0).squaredNorm();
        REQUIRE(mesh.triangles.size() == outline.size() - 2);
        CHECK(area_of(mesh) == about(area * scale).epsilon(1e-9));
        for (Vec3& corner : outline) corner += offset;
        CHECK(cut_polygon(outline).size() == outline.size() - 2);
        std::reverse(outline.begin(), outline.end());
        CHECK(cut_polygon(outline).size() == outline.size() - 2);
    }
    CHECK(checked > 1000);
}

TEST_CASE("corners on straight edges, doubled corners and slits are kept") {
    const std::vector<Vec3> straight = {{0, 0, 0}, {1, 0, 0}, {2, 0, 0}, {2, 2, 0},
                                        {1, 2, 0}, {0, 2, 0}, {0, 1, 0}};
    CHECK(cut_polygon(straight).size() == 5);
    const std::vector<Vec3> doubled = {{0, 0, 0}, {1, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}};
    CHECK(cut_polygon(doubled).size() == 3);
    // A square with a square hole, joined by a slit that is walked both ways.
    const std::vector<Vec3> ring = {{0, 0, 0}, {3, 0, 0}, {3, 3, 0}, {0, 3, 0}, {0, 0, 0},
                                    {1, 1, 0}, {1, 2, 0}, {2, 2, 0}, {2, 1, 0}, {1, 1, 0}};
    const Mesh mesh{.vertices = ring, .triangles = cut_polygon(ring)};
    CHECK(mesh.triangles.size() == 8);
    CHECK(area_of(mesh) == about(8).epsilon(1e-12));
    CHECK(cut_polygon(std::vector<Vec3>{{0, 0, 0}, {1, 0, 0}}).empty());
    CHECK(cut_polygon(std::vector<Vec3>{{0, 0, 0}, {1, 0, 0}, {2, 0, 0}, {3, 0, 0}}).empty());
    CHECK(cut_polygon(std::vector<Vec3>{{0, 0, 0}, {1, 1, 0}, {1, 0, 0}, {0, 1, 0}}).empty());
}
