// Layouts, packing, zones.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/files.h>
#include <glint/core/samples.h>
#include <glint/emitter/array.h>
#include <glint/emitter/layout.h>

#include <doctest/doctest.h>
#include <fmt/format.h>
#include <unistd.h>
#include <algorithm>
#include <cmath>
#include <set>

using namespace glint;
namespace fs = std::filesystem;

namespace {

Emitters grid(int rows, int columns, double pitch, double aperture) {
    Emitters emitters{.wavelength = 940e-9, .aperture = aperture};
    emitters.layout = {.kind = LayoutKind::grid, .rows = rows, .columns = columns, .pitch = pitch};
    return emitters;
}

EmitterArray upright(const Emitters& emitters) { return build_array(emitters, FieldSense::upright, ""); }

// Independent slow nearest distance.
double slow_nearest(const std::vector<Vec2>& positions) {
    double nearest = 1e9;
    for (std::size_t i = 0; i < positions.size(); ++i)
        for (std::size_t j = 0; j < i; ++j) nearest = std::min(nearest, (positions[i] - positions[j]).norm());
    return nearest;
}

struct ListFile {
    fs::path path = fs::temp_directory_path() / fmt::format("glint-list-{}.csv", ::getpid());
    explicit ListFile(const std::string& text) { write_file(path, text); }
    ~ListFile() { fs::remove(path); }
};

}  // namespace

TEST_CASE("packing: 2 um apertures at 3 um centres, square grid") {
    // Common practice, no source: such chips are made; 1 / (3 um)^2 = 111 111 per mm2, pi/4 (2/3)^2 = 34.9 %.
    const Emitters emitters = grid(50, 40, 3e-6, 2e-6);
    const Packing packed = packing(emitters, upright(emitters));
    CHECK(packed.density * 1e-6 == about(111111.1).epsilon(1e-6));
    CHECK(packed.fill == about(0.349066).epsilon(1e-5));
    CHECK(packed.nearest == about(3e-6).epsilon(1e-9));
}

TEST_CASE("packing: square and hexagonal lattices, textbook") {
    // Lattice geometry: n = 1/p^2 and 2/(sqrt3 p^2); p = 40 um, d = 10 um: 625 and 721.69 per mm2.
    Emitters emitters = grid(20, 20, 40e-6, 10e-6);
    CHECK(packing(emitters, upright(emitters)).density * 1e-6 == about(625));
    CHECK(packing(emitters, upright(emitters)).fill == about(0.049087).epsilon(1e-4));
    emitters.layout.kind = LayoutKind::hexagonal;
    const EmitterArray hexagonal = upright(emitters);
    CHECK(packing(emitters, hexagonal).density * 1e-6 == about(721.69).epsilon(1e-5));
    CHECK(packing(emitters, hexagonal).fill == about(0.056681).epsilon(1e-4));
    CHECK(slow_nearest(hexagonal.positions) == about(40e-6).epsilon(1e-9));
}

TEST_CASE("a touching lattice fills pi/4 square and pi/(2 sqrt3) hexagonal") {
    Emitters emitters = grid(8, 8, 10e-6, 10e-6);
    CHECK(packing(emitters, upright(emitters)).fill == about(pi / 4));
    emitters.layout.kind = LayoutKind::hexagonal;
    CHECK(packing(emitters, upright(emitters)).fill == about(pi / (2 * std::sqrt(3.0))));
}

TEST_CASE("every raster is centred on the chip") {
    for (const LayoutKind kind : {LayoutKind::grid, LayoutKind::hexagonal}) {
        Emitters emitters = grid(6, 5, 20e-6, 5e-6);
        emitters.layout.kind = kind;
        Vec2 sum = Vec2::Zero();
        for (const Vec2& p : upright(emitters).positions) sum += p;
        CHECK(sum.norm() < 1e-18);
    }
}

TEST_CASE(
    "scattered places keep their spacing, repeat by seed, and fill as densely as Bridson sampling does") {
    Emitters emitters{.wavelength = 940e-9, .aperture = 5e-6};
    emitters.layout = {
        .kind = LayoutKind::scattered, .width = 1.2e-3, .height = 1e-3, .spacing = 20e-6, .seed = 4};
    const EmitterArray array = upright(emitters);
    CHECK(slow_nearest(array.positions) >= 20e-6);
    CHECK(packing(emitters, array).nearest == about(slow_nearest(array.positions)));
    for (const Vec2& p : array.positions) CHECK((std::abs(p.x()) <= 0.6e-3 && std::abs(p.y()) <= 0.5e-3));
    // Interior density of 0.615 / r^2 for 30 tries (own simulation of Bridson 2007); the border adds a few
    // percent.
    const double density = static_cast<double>(array.size()) / (1.2e-3 * 1e-3) * 20e-6 * 20e-6;
    CHECK(density > 0.60);
    CHECK(density < 0.70);  // random sequential adsorption jams at 0.6965 / r^2 (published coverage 0.547)
    CHECK(upright(emitters).positions == array.positions);
    emitters.layout.seed = 5;
    CHECK(upright(emitters).positions != array.positions);
}

TEST_CASE("the fast nearest distance equals the slow one on random sets") {
    RandomStream random(11);
    for (int trial = 0; trial < 200; ++trial) {
        std::vector<Vec2> positions;
        const double stretch = std::pow(10.0, -3 + 3 * random.uniform());  // from square to nearly a line
        const auto count = 2 + random.below(60);
        for (std::uint64_t i = 0; i < count; ++i)
            positions.emplace_back(random.uniform(), stretch * random.uniform());
        CHECK(nearest_distance(positions) == about(slow_nearest(positions)).epsilon(1e-12));
    }
}

TEST_CASE("zones count from the upper left of the field, and a lens turns the chip over") {
    Emitters emitters = grid(4, 6, 10e-6, 5e-6);
    emitters.addressing = {.scheme = AddressingScheme::blocks, .rows = 2, .columns = 3};
    const EmitterArray bare = upright(emitters);
    CHECK(bare.zones == 6);
    CHECK(bare.zone_of.front() == 0);
    CHECK(bare.positions.front().x() < 0);  // left
    CHECK(bare.positions.front().y() > 0);  // up
    const EmitterArray behind_lens = build_array(emitters, FieldSense::inverted, "");
    CHECK(behind_lens.zone_of == bare.zone_of);
    CHECK(behind_lens.positions.front() == -bare.positions.front());
}

TEST_CASE("every scheme gives zones of equal size that cover the array") {
    for (const AddressingScheme scheme :
         {AddressingScheme::individual, AddressingScheme::rows, AddressingScheme::columns,
          AddressingScheme::blocks, AddressingScheme::interleaved, AddressingScheme::matrix}) {
        Emitters emitters = grid(8, 12, 10e-6, 5e-6);
        emitters.addressing = {.scheme = scheme};
        if (scheme != AddressingScheme::individual && scheme != AddressingScheme::columns)
            emitters.addressing.rows = 4;
        if (scheme != AddressingScheme::individual && scheme != AddressingScheme::rows)
            emitters.addressing.columns = 3;
        const EmitterArray array = upright(emitters);
        const ZoneMembers members = members_of(array);
        for (int zone = 0; zone < array.zones; ++zone) CHECK(members.count(zone) * array.zones == 96);
    }
}

TEST_CASE("interleaved zones are spread over the chip, blocks are not") {
    Emitters emitters = grid(8, 8, 10e-6, 5e-6);
    emitters.addressing = {.scheme = AddressingScheme::interleaved, .rows = 2, .columns = 2};
    const auto width = [](const EmitterArray& array) {
        double low = 1, high = -1;
        for (std::size_t i = 0; i < array.size(); ++i)
            if (array.zone_of[i] == 0)
                low = std::min(low, array.positions[i].x()), high = std::max(high, array.positions[i].x());
        return high - low;
    };
    CHECK(width(upright(emitters)) == about(60e-6));
    emitters.addressing.scheme = AddressingScheme::blocks;
    CHECK(width(upright(emitters)) == about(30e-6));
}

TEST_CASE("a list gives places and zones") {
    const ListFile file("# invented\nx_um, y_um, zone\n0, 10, 0\n5, -10, 1\n-5, -10, 1\n");
    Emitters emitters{.wavelength = 940e-9, .aperture = 4e-6};
    emitters.layout = {.kind = LayoutKind::list, .file = file.path.filename().string()};
    emitters.addressing.scheme = AddressingScheme::list;
    const EmitterArray array = build_array(emitters, FieldSense::upright, file.path.parent_path());
    CHECK(array.zones == 2);
    CHECK(array.positions[1] == Vec2(5e-6, -10e-6));
    CHECK(array.zone_of == std::vector<int>{0, 1, 1});
}

TEST_CASE("bad lists say what is wrong and where") {
    const auto message = [](const std::string& text) -> std::string {
        const ListFile file(text);
        try {
            [[maybe_unused]] const Places2d places = list_layout(file.path);
        } catch (const Error& error) {
            return error.what();
        }
        return "";
    };
    const auto holds = [&](const std::string& text, const char* part) {
        const std::string got = message(text);
        CHECK_MESSAGE(got.find(part) != std::string::npos, got);
    };
    holds("", "no emitter in the list");
    holds("x_um,y_um\n", "no emitter in the list");
    holds("x,y\n1,2\n", ":1: unknown column 'x'");
    holds("x_um,y_um\n1\n", ":2: 1 values where the header names 2");
    holds("x_um,y_um\n1,nan\n", ":2: 'nan' is no place on a chip");
    holds("x_um,y_um\n1,2\n1,2\n", ":3: two emitters at one place");
    holds("x_um,y_um,zone\n1,2,-1\n", ":2: '-1' is no zone number");
    holds("x_um,y_um,zone\n1,2,0\n1,3,2\n", "zone 1 has no emitter");
    holds("x_m,y_m\n1,2\n", "'1' is no place on a chip");
}

TEST_CASE("overlapping emitters are refused") {
    CHECK_THROWS_WITH_AS((void)upright(grid(4, 4, 8e-6, 10e-6)), doctest::Contains("sit only 8 um apart"),
                         Error);
}
