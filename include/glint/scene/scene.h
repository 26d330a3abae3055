// The scene: materials, objects and their shapes, ready for casting.
#pragma once

#include <glint/scene/bounds.h>
#include <glint/scene/hierarchy.h>
#include <glint/scene/material.h>
#include <glint/scene/mesh.h>
#include <glint/scene/shape.h>
#include <glint/scene/triangle.h>

#include <cstdint>
#include <string>
#include <vector>

namespace glint {

/// Something with a name; any number of shapes belong to it.
struct Object {
    std::string name;
    int material = 0;  ///< index into the materials
};

/// A shape and the object it belongs to.
template <class Shape>
struct Placed {
    Shape shape;
    int object = 0;  ///< index into the objects
};

/// What a scene is made from.
struct SceneParts {
    std::vector<Material> materials;
    std::vector<Object> objects;
    std::vector<Placed<Plane>> planes;
    std::vector<Placed<Box>> boxes;
    std::vector<Placed<Sphere>> spheres;
    std::vector<Placed<Cylinder>> cylinders;
    std::vector<Placed<Mesh>> meshes;
};

/// Kinds of finite primitives.
enum class PrimitiveKind : std::uint32_t { triangle, box, sphere, cylinder };

/// Where a primitive of the hierarchy is stored.
struct Primitive {
    PrimitiveKind kind = PrimitiveKind::triangle;
    std::uint32_t index = 0;  ///< into the list of its kind
};

/// A scene as the queries of cast.h need it; made by build_scene, and not changed afterwards.
struct Scene {
    std::vector<Material> materials;
    std::vector<Object> objects;
    std::vector<Placed<Plane>> planes;
    std::vector<Placed<Box>> boxes;
    std::vector<Placed<Sphere>> spheres;
    std::vector<Placed<Cylinder>> cylinders;
    std::vector<Placed<Triangle>> triangles;  ///< of all meshes, in the order of the leaves
    std::vector<Primitive> primitives;        ///< in the order of the leaves
    Hierarchy hierarchy;                      ///< over all finite primitives
    Bounds bounds;                            ///< of all finite primitives; empty when there are none
    double extent = 0;                        ///< largest |coordinate| of bounds and of the planes' points, m
};

/// Largest |coordinate| a scene may have [m].
inline constexpr double largest_coordinate = 1e9;

/// Checks the parts and builds the hierarchy. The result depends on the parts only. An empty scene is fine.
/// Errors (all of them, each naming the object): indices out of range; sizes not above 0; coordinates not
/// finite or beyond largest_coordinate; normals and axes that are not unit vectors, rotations that are none
/// (both to 1e-6; what is left is normalized away); reflectance tables that are not as described at Material.
[[nodiscard]] Scene build_scene(SceneParts parts);

}  // namespace glint
