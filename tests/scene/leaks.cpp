// No ray passes a closed surface of triangles, not even where they meet.
#include "scene/support.h"

#include <doctest/doctest.h>

using namespace glint;
using namespace glint::testing;

namespace {

Scene closed(const Mesh& mesh) {
    SceneParts parts;
    parts.materials = {grey()};
    parts.objects = {{.name = "shell"}};
    parts.meshes = {{mesh, 0}};
    return build_scene(parts);
}

// Rays that get out, of those aimed from inside at chosen points of the surface.
struct Leaks {
    int rays = 0, passed = 0, unoccluded = 0;
    void aim(const Scene& scene, const Vec3& origin, const Vec3& target) {
        const Ray ray{.origin = origin, .direction = (target - origin).normalized()};
        ++rays;
        passed += !closest_hit(scene, ray);
        unoccluded += !occluded(scene, ray);
    }
    void none(const std::string& where) const {
        MESSAGE(where << ": " << passed << " of " << rays << " rays leak");
        CHECK(passed == 0);
        CHECK(unoccluded == 0);
    }
};

constexpr int aimed = 262144;

void check_shell(const Mesh& mesh, const Vec3& centre, double safe_radius, const char* name) {
    const Scene scene = closed(mesh);
    RandomStream random(11);
    Leaks vertices, edges, on_edges;
    for (int i = 0; i < aimed; ++i) {
        const Vec3 inside = centre + random_place(random, safe_radius / 2);
        const Vec3 origin = i % 8 == 0 ? centre : inside;
        vertices.aim(scene, origin, mesh.vertices[random.below(mesh.vertices.size())]);
        const std::array<int, 3>& triangle = mesh.triangles[random.below(mesh.triangles.size())];
        const Vec3 &a = mesh.vertices[triangle[0]], &b = mesh.vertices[triangle[1]];
        edges.aim(scene, origin, 0.5 * (a + b));
        on_edges.aim(scene, origin, a + random.uniform() * (b - a));
    }
    vertices.none(std::string(name) + ", at vertices");
    edges.none(std::string(name) + ", at edge midpoints");
    on_edges.none(std::string(name) + ", along edges");
}

}  // namespace

TEST_CASE("closed spheres of triangles let no ray out at vertices and edges") {
    check_shell(ball(4), Vec3::Zero(), 0.9, "ball of 5,120");
    RandomStream random(12);
    const Vec3 away(1000, -2000, 500);
    check_shell(transformed(ball(3), random_rotation(random) * 0.1, away), away, 0.08, "small ball far away");
}

TEST_CASE("a closed sphere of rings and sectors, with slivers at the poles, is tight") {
    constexpr int rings = 64, sectors = 256;
    Mesh globe;
    globe.vertices.emplace_back(0, 0, 1);
    for (int r = 1; r < rings; ++r)
        for (int s = 0; s < sectors; ++s) {
            const double polar = pi * r / rings, around = 2 * pi * s / sectors;
            globe.vertices.emplace_back(std::sin(polar) * std::cos(around),
                                        std::sin(polar) * std::sin(around), std::cos(polar));
        }
    globe.vertices.emplace_back(0, 0, -1);
    const int last = static_cast<int>(globe.vertices.size()) - 1;
    const auto at = [](int ring, int sector) { return 1 + (ring - 1) * sectors + sector % sectors; };
    for (int s = 0; s < sectors; ++s) {
        globe.triangles.push_back({0, at(1, s), at(1, s + 1)});
        globe.triangles.push_back({last, at(rings - 1, s), at(rings - 1, s + 1)});
        for (int r = 1; r + 1 < rings; ++r) {
            globe.triangles.push_back({at(r, s), at(r + 1, s), at(r, s + 1)});
            globe.triangles.push_back({at(r, s + 1), at(r + 1, s), at(r + 1, s + 1)});
        }
    }
    check_shell(globe, Vec3::Zero(), 0.9, "globe of 32,256");
}

TEST_CASE("a rough wall of 1 cm cells at 50 m is tight for a grid of rays at its corners") {
    constexpr int cells = 256;
    RandomStream random(13);
    Mesh wall;
    for (int i = 0; i <= cells; ++i)
        for (int j = 0; j <= cells; ++j)
            wall.vertices.emplace_back(50 + 0.004 * random.uniform(), 0.01 * (i - cells / 2),
                                       0.01 * (j - cells / 2));
    for (int i = 0; i < cells; ++i)
        for (int j = 0; j < cells; ++j) {
            const int a = (cells + 1) * i + j;
            wall.triangles.push_back({a, a + 1, a + cells + 1});
            wall.triangles.push_back({a + 1, a + cells + 2, a + cells + 1});
        }
    const Scene scene = closed(wall);
    Leaks corners, middles;
    for (const Vec3& origin : {Vec3(0, 0, 0), Vec3(0, 0.3, -0.1), Vec3(49, 0.5, 0.5), Vec3(-900, 3, 2)})
        for (int i = 1; i < cells; ++i)
            for (int j = 1; j < cells; ++j) {
                const int a = (cells + 1) * i + j;
                corners.aim(scene, origin, wall.vertices[a]);
                middles.aim(scene, origin, 0.5 * (wall.vertices[a] + wall.vertices[a + 1]));
                middles.aim(scene, origin, 0.5 * (wall.vertices[a + 1] + wall.vertices[a + cells + 1]));
            }
    corners.none("rough wall, at vertices");
    middles.none("rough wall, at edge midpoints");
}

TEST_CASE("a flat wall on the axes is tight where ray, edge and bounds share a plane") {
    Mesh wall;
    for (int i = 0; i <= 32; ++i)
        for (int j = 0; j <= 32; ++j) wall.vertices.emplace_back(8, 0.25 * (i - 16), 0.25 * (j - 16));
    for (int i = 0; i < 32; ++i)
        for (int j = 0; j < 32; ++j) {
            const int a = 33 * i + j;
            wall.triangles.push_back({a, a + 1, a + 33});
            wall.triangles.push_back({a + 1, a + 34, a + 33});
        }
    const Scene scene = closed(wall);
    Leaks straight, fan;
    for (const Vec3& vertex : wall.vertices) {
        straight.aim(scene, {0, vertex.y(), vertex.z()}, vertex);
        fan.aim(scene, {0, 0, 0}, vertex);
    }
    straight.none("flat wall, straight on");
    fan.none("flat wall, fan of rays to its very rim");
}
