// Putting a scene together: primitives in the order of the leaves of their hierarchy.
#include "check.h"

#include <glint/core/error.h>
#include <glint/scene/scene.h>

#include <algorithm>
#include <cmath>
#include <utility>

namespace glint {
namespace {

// The rotation closest to a matrix that is one up to rounding: one step of the Newton iteration for the polar
// decomposition (Higham 1986) squares the error.
Mat3 nearest_rotation(const Mat3& matrix) {
    return matrix * (1.5 * Mat3::Identity() - 0.5 * matrix.transpose() * matrix);
}

std::vector<Placed<Triangle>> triangles_of(const std::vector<Placed<Mesh>>& meshes) {
    std::size_t count = 0;
    for (const auto& [mesh, object] : meshes) count += mesh.triangles.size();
    std::vector<Placed<Triangle>> triangles;
    triangles.reserve(count);
    for (const auto& [mesh, object] : meshes)
        for (const auto& [a, b, c] : mesh.triangles)
            triangles.push_back({{mesh.vertices[a], mesh.vertices[b], mesh.vertices[c]}, object});
    return triangles;
}

template <class Shape>
void list(const std::vector<Placed<Shape>>& shapes, PrimitiveKind kind, std::vector<Primitive>& primitives,
          std::vector<Bounds>& bounds) {
    for (std::uint32_t i = 0; i < shapes.size(); ++i) {
        primitives.push_back({kind, i});
        bounds.push_back(bounds_of(shapes[i].shape));
    }
}

}  // namespace

Scene build_scene(SceneParts parts) {
    if (std::vector<Problem> problems = problems_of(parts); !problems.empty())
        throw Error(std::move(problems));
    Scene scene;
    scene.materials = std::move(parts.materials);
    scene.objects = std::move(parts.objects);
    scene.planes = std::move(parts.planes);
    scene.boxes = std::move(parts.boxes);
    scene.spheres = std::move(parts.spheres);
    scene.cylinders = std::move(parts.cylinders);
    for (auto& plane : scene.planes) plane.shape.normal.normalize();
    for (auto& cylinder : scene.cylinders) cylinder.shape.axis.normalize();
    for (auto& box : scene.boxes) box.shape.rotation = nearest_rotation(box.shape.rotation);

    const std::vector<Placed<Triangle>> triangles = triangles_of(parts.meshes);
    parts.meshes.clear();
    std::vector<Primitive> primitives;
    std::vector<Bounds> bounds;
    primitives.reserve(triangles.size());
    bounds.reserve(triangles.size());
    list(triangles, PrimitiveKind::triangle, primitives, bounds);
    list(scene.boxes, PrimitiveKind::box, primitives, bounds);
    list(scene.spheres, PrimitiveKind::sphere, primitives, bounds);
    list(scene.cylinders, PrimitiveKind::cylinder, primitives, bounds);

    scene.hierarchy = build_hierarchy(bounds);
    scene.primitives.reserve(primitives.size());
    scene.triangles.reserve(triangles.size());
    for (const std::uint32_t number : scene.hierarchy.order) {
        Primitive primitive = primitives[number];
        if (primitive.kind == PrimitiveKind::triangle) {
            scene.triangles.push_back(triangles[primitive.index]);
            primitive.index = static_cast<std::uint32_t>(scene.triangles.size() - 1);
        }
        scene.primitives.push_back(primitive);
    }
    if (!scene.hierarchy.nodes.empty()) scene.bounds = scene.hierarchy.nodes.front().bounds;
    scene.extent = scene.hierarchy.extent;
    for (const auto& [plane, object] : scene.planes)
        scene.extent = std::max(scene.extent, plane.point.cwiseAbs().maxCoeff());
    return scene;
}

}  // namespace glint
