// What build_scene refuses, and what it makes of good parts.
#include "scene/support.h"

#include <glint/core/error.h>

#include <doctest/doctest.h>

using namespace glint;
using namespace glint::testing;

namespace {

SceneParts small() {
    SceneParts parts;
    parts.materials = {grey()};
    parts.objects = {{.name = "thing", .material = 0}};
    parts.planes = {{{}, 0}};
    parts.boxes = {{{}, 0}};
    parts.spheres = {{{}, 0}};
    parts.cylinders = {{{}, 0}};
    parts.meshes = {{ball(0), 0}};
    return parts;
}

// Spoils one thing in good parts; the one complaint must hold the text.
template <class Spoil>
void refused(const std::string& text, Spoil&& spoil) {
    SceneParts parts = small();
    spoil(parts);
    try {
        (void)build_scene(parts);
        FAIL("accepted: " << text);
    } catch (const Error& error) {
        CHECK_MESSAGE(error.problems().size() == 1, error.what());
        CHECK_MESSAGE(error.problems()[0].what == text, error.what());
        CHECK_FALSE(error.problems()[0].accepted.empty());
    }
}

}  // namespace

TEST_CASE("good parts: counts, bounds and materials") {
    const Scene scene = build_scene(small());
    CHECK(scene.triangles.size() == 20);
    CHECK(scene.primitives.size() == 23);
    CHECK(scene.bounds.low == Vec3(-1, -1, -1));
    CHECK(scene.bounds.high == Vec3(1, 1, 1));
    CHECK(scene.extent == 1);
}

TEST_CASE("bad parts are refused with the name of their object") {
    const double nan = std::numeric_limits<double>::quiet_NaN(),
                 inf = std::numeric_limits<double>::infinity();
    refused("object 'thing' has material 1, which does not exist",
            [](SceneParts& p) { p.objects[0].material = 1; });
    refused("object 'thing' has material -1, which does not exist",
            [](SceneParts& p) { p.objects[0].material = -1; });
    refused("sphere 0 belongs to object 7, which does not exist",
            [](SceneParts& p) { p.spheres[0].object = 7; });
    for (const double size : {0.0, -1.0, nan, inf, 2e9}) {
        refused("sphere 0 of object 'thing': the radius is not a positive size",
                [&](SceneParts& p) { p.spheres[0].shape.radius = size; });
        refused("cylinder 0 of object 'thing': the length is not a positive size",
                [&](SceneParts& p) { p.cylinders[0].shape.length = size; });
        refused("box 0 of object 'thing': a half size is not a positive size",
                [&](SceneParts& p) { p.boxes[0].shape.half_size[1] = size; });
    }
    for (const double place : {nan, inf, -inf, 2e9}) {
        refused("plane 0 of object 'thing': the point is not finite or too far out",
                [&](SceneParts& p) { p.planes[0].shape.point.y() = place; });
        refused("mesh 0 of object 'thing': vertex 3 is not finite or too far out",
                [&](SceneParts& p) { p.meshes[0].shape.vertices[3].z() = place; });
    }
    refused("plane 0 of object 'thing': the normal is not a unit vector",
            [](SceneParts& p) { p.planes[0].shape.normal *= 1.001; });
    refused("cylinder 0 of object 'thing': the axis is not a unit vector",
            [&](SceneParts& p) { p.cylinders[0].shape.axis.setConstant(nan); });
    refused("box 0 of object 'thing': the rotation is none",
            [](SceneParts& p) { p.boxes[0].shape.rotation(0, 1) = 0.01; });
    refused("box 0 of object 'thing': the rotation is none",
            [](SceneParts& p) { p.boxes[0].shape.rotation *= -1; });
    refused("mesh 0 of object 'thing': triangle 4 has vertex 12, which does not exist",
            [](SceneParts& p) { p.meshes[0].shape.triangles[4][2] = 12; });
    refused("mesh 0 of object 'thing': triangle 0 has vertex -1, which does not exist",
            [](SceneParts& p) { p.meshes[0].shape.triangles[0][0] = -1; });
    refused("material 'grey' has no reflectance", [](SceneParts& p) { p.materials[0].table.clear(); });
    refused("material 'grey': reflectance 1.500000 of entry 0",
            [](SceneParts& p) { p.materials[0].table[0].reflectance = 1.5; });
    refused("material 'grey': wavelength of entry 0",
            [&](SceneParts& p) { p.materials[0].table[0].wavelength = nan; });
    refused("material 'grey': wavelengths do not rise at entry 1",
            [](SceneParts& p) { p.materials[0].table.push_back(p.materials[0].table[0]); });
}

TEST_CASE("all problems are reported together") {
    SceneParts parts = small();
    parts.spheres[0].shape.radius = -1;
    parts.cylinders[0].object = 9;
    parts.materials[0].table.clear();
    try {
        (void)build_scene(parts);
        FAIL("accepted");
    } catch (const Error& error) {
        CHECK(error.problems().size() == 3);
    }
}

TEST_CASE("vectors and rotations that are unit to a millionth are made so to rounding") {
    SceneParts parts = small();
    parts.planes[0].shape.normal *= 1 + 9e-7;
    parts.cylinders[0].shape.axis *= 1 - 9e-7;
    parts.boxes[0].shape.rotation.col(1) += 5e-7 * Vec3::UnitX();
    const Scene scene = build_scene(parts);
    CHECK(std::abs(scene.planes[0].shape.normal.norm() - 1) < 1e-15);
    CHECK(std::abs(scene.cylinders[0].shape.axis.norm() - 1) < 1e-15);
    const Mat3& rotation = scene.boxes[0].shape.rotation;
    CHECK((rotation.transpose() * rotation - Mat3::Identity()).cwiseAbs().maxCoeff() < 1e-12);
}
