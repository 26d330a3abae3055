// A scanned mesh of everyday quality: read, cast, and compared with a slow loop and with its own shadow.
//
// The environment variable GLINT_TEST_DATA names the folder of bunny.obj; tests/fetch-bunny.sh makes it.
#include "scene/support.h"

#include <doctest/doctest.h>
#include <cstdlib>

using namespace glint;
using namespace glint::testing;

namespace {

Mesh bunny() {
    const char* folder = std::getenv("GLINT_TEST_DATA");
    if (folder == nullptr || *folder == '\0')
        FAIL("GLINT_TEST_DATA is not set: run the tests with bash tests/run.sh");
    return read_obj(std::string(folder) + "/bunny.obj");
}

SceneParts parts_of(const Mesh& mesh) {
    SceneParts parts;
    parts.materials = {grey()};
    parts.objects = {{.name = "bunny"}};
    parts.meshes = {{mesh, 0}};
    return parts;
}

// Whether the shadow of the mesh along z covers a point of the xy plane: no distances, no tree.
bool in_shadow(const Mesh& mesh, double x, double y) {
    for (const auto& [a, b, c] : mesh.triangles) {
        const auto turn = [&](int i, int j) {
            const Vec3 &p = mesh.vertices[i], &q = mesh.vertices[j];
            return (p.x() - x) * (q.y() - y) - (p.y() - y) * (q.x() - x);
        };
        const double u = turn(a, b), v = turn(b, c), w = turn(c, a);
        if ((u > 0 && v > 0 && w > 0) || (u < 0 && v < 0 && w < 0)) return true;
    }
    return false;
}

}  // namespace

TEST_CASE("bunny: the file is whole") {
    const Mesh mesh = bunny();
    CHECK(mesh.vertices.size() == 1839);
    CHECK(mesh.triangles.size() == 3674);  // 2 vertices - 4: a closed surface without handles (Euler)
    const Bounds bounds = build_scene(parts_of(mesh)).bounds;
    CHECK((bounds.low - Vec3(-4.958475, -0.003149, -3.729833)).norm() < 1e-12);
    CHECK((bounds.high - Vec3(4.94885, 9.654748, 3.810639)).norm() < 1e-12);
}

TEST_CASE("bunny: hits equal those of a loop over all triangles") {
    const SceneParts parts = parts_of(bunny());
    const Scene scene = build_scene(parts);
    RandomStream random(55);
    int hits = 0, faults = 0;
    for (int i = 0; i < 4000; ++i) {
        const Vec3 origin = scene.bounds.centre() + 12 * random_direction(random);
        const Vec3 target = scene.bounds.centre() + random_place(random, 4);
        const Ray ray{.origin = origin, .direction = (target - origin).normalized()};
        const std::optional<Hit> hit = closest_hit(scene, ray);
        hits += hit.has_value();
        const std::string wrong = disagreement(parts, ray, hit);
        if (!wrong.empty() && ++faults < 5) MESSAGE("ray " << i << ": " << wrong);
        faults += occluded(scene, ray) != hit.has_value();
    }
    CHECK(faults == 0);
    CHECK(hits > 1500);
}

TEST_CASE("bunny: hits fill the bounding box, and the silhouette is the shadow of its triangles") {
    const Mesh mesh = bunny();
    const Scene scene = build_scene(parts_of(mesh));
    constexpr int steps = 160;
    const Vec3 size = scene.bounds.high - scene.bounds.low;
    Bounds seen;
    int covered = 0, unlike = 0;
    for (int i = 0; i < steps; ++i)
        for (int j = 0; j < steps; ++j) {
            const double x = scene.bounds.low.x() + size.x() * (i + 0.5) / steps;
            const double y = scene.bounds.low.y() + size.y() * (j + 0.5) / steps;
            const std::optional<Hit> front =
                closest_hit(scene, {.origin = {x, y, 50}, .direction = -Vec3::UnitZ()});
            const std::optional<Hit> back =
                closest_hit(scene, {.origin = {x, y, -50}, .direction = Vec3::UnitZ()});
            unlike += front.has_value() != back.has_value();
            unlike += front.has_value() != in_shadow(mesh, x, y);
            if (!front || !back) continue;
            ++covered;
            seen.add(front->point);
            seen.add(back->point);
            unlike += back->point.z() > front->point.z();
        }
    CHECK(unlike == 0);
    // One step of the grid in x and y; in z the extreme vertex lies between rays.
    const Vec3 slack(size.x() / steps, size.y() / steps, 0.02 * size.z());
    CHECK((seen.low.array() <= (scene.bounds.low + slack).array()).all());
    CHECK((seen.high.array() >= (scene.bounds.high - slack).array()).all());
    const double share = static_cast<double>(covered) / (steps * steps);
    MESSAGE("the silhouette covers " << 100 * share << " % of its frame");
    CHECK(share > 0.3);
    CHECK(share < 0.8);
}

TEST_CASE("bunny: no ray gets out from inside") {
    const Mesh mesh = bunny();
    const Scene scene = build_scene(parts_of(mesh));
    // A place inside: halfway through the body along z at its middle.
    const Vec3 middle = scene.bounds.centre();
    const Vec3 above(middle.x(), 4, 50), below(middle.x(), 4, -50);
    const std::optional<Hit> front = closest_hit(scene, {.origin = above, .direction = -Vec3::UnitZ()});
    const std::optional<Hit> back = closest_hit(scene, {.origin = below, .direction = Vec3::UnitZ()});
    REQUIRE(front);
    REQUIRE(back);
    const Vec3 inside = 0.5 * (front->point + back->point);
    int rays = 0, leaks = 0;
    const auto aim = [&](const Vec3& target) {
        ++rays;
        leaks += !closest_hit(scene, {.origin = inside, .direction = (target - inside).normalized()});
    };
    for (const Vec3& vertex : mesh.vertices) aim(vertex);
    for (const auto& [a, b, c] : mesh.triangles) {
        aim(0.5 * (mesh.vertices[a] + mesh.vertices[b]));
        aim(0.5 * (mesh.vertices[b] + mesh.vertices[c]));
        aim(0.5 * (mesh.vertices[c] + mesh.vertices[a]));
    }
    CHECK(leaks == 0);
    MESSAGE(leaks << " of " << rays << " rays at vertices and edge midpoints leak");
}
