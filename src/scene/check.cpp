// What is wrong with the parts of a scene.
#include "check.h"

#include <Eigen/Geometry>
#include <cmath>
#include <cstddef>
#include <string>

namespace glint {
namespace {

constexpr double unit_tolerance = 1e-6;

bool usable(const Vec3& v) { return (v.array().abs() <= largest_coordinate).all(); }  // false for NaN
bool usable_size(double size) { return size > 0 && size <= largest_coordinate; }
bool unit(const Vec3& v) { return std::abs(v.norm() - 1) <= unit_tolerance; }
bool rotation(const Mat3& m) {
    const Mat3 rest = m.transpose() * m - Mat3::Identity();
    const bool right_handed = m.col(0).cross(m.col(1)).dot(m.col(2)) > 0;
    return (rest.array().abs() <= unit_tolerance).all() && right_handed;
}

// Collects problems of one list of shapes, each named by its place and its object.
struct Findings {
    const SceneParts& parts;
    std::vector<Problem> problems;

    void add(std::string what, std::string accepted) {
        problems.push_back({.what = std::move(what), .accepted = std::move(accepted)});
    }

    template <class Shape, class Check>
    void examine(const std::vector<Placed<Shape>>& shapes, const std::string& kind, Check&& check) {
        for (std::size_t i = 0; i < shapes.size(); ++i) {
            const int object = shapes[i].object;
            const bool known = object >= 0 && static_cast<std::size_t>(object) < parts.objects.size();
            std::string name = kind + " " + std::to_string(i);
            if (known) name += " of object '" + parts.objects[static_cast<std::size_t>(object)].name + "'";
            if (!known)
                add(name + " belongs to object " + std::to_string(object) + ", which does not exist",
                    "a number below " + std::to_string(parts.objects.size()));
            check(shapes[i].shape, name);
        }
    }

    void need_place(const Vec3& v, const std::string& what) {
        if (!usable(v)) add(what + " is not finite or too far out", "coordinates up to 1e9 m");
    }
    void need_size(double size, const std::string& what) {
        if (!usable_size(size)) add(what + " is not a positive size", "above 0, up to 1e9 m");
    }
    void need_unit(const Vec3& v, const std::string& what) {
        if (!unit(v)) add(what + " is not a unit vector", "length 1");
    }
    void need_corners(const Mesh& mesh, const std::string& name) {
        for (std::size_t i = 0; i < mesh.vertices.size(); ++i)
            if (!usable(mesh.vertices[i])) {
                need_place(mesh.vertices[i], name + ": vertex " + std::to_string(i));
                break;  // one line a mesh is enough
            }
        for (std::size_t i = 0; i < mesh.triangles.size(); ++i)
            for (const int corner : mesh.triangles[i])
                if (corner < 0 || static_cast<std::size_t>(corner) >= mesh.vertices.size()) {
                    add(name + ": triangle " + std::to_string(i) + " has vertex " + std::to_string(corner) +
                            ", which does not exist",
                        "a number below " + std::to_string(mesh.vertices.size()));
                    return;
                }
    }
    void need_table(const Material& material) {
        const std::string name = "material '" + material.name + "'";
        if (material.table.empty()) add(name + " has no reflectance", "at least one entry");
        for (std::size_t i = 0; i < material.table.size(); ++i) {
            const ReflectanceAt& entry = material.table[i];
            if (!(entry.reflectance >= 0 && entry.reflectance <= 1))
                add(name + ": reflectance " + std::to_string(entry.reflectance) + " of entry " +
                        std::to_string(i),
                    "0 to 1");
            if (!(entry.wavelength > 0 && std::isfinite(entry.wavelength)))
                add(name + ": wavelength of entry " + std::to_string(i), "a finite length above 0");
            if (i > 0 && !(entry.wavelength > material.table[i - 1].wavelength))
                add(name + ": wavelengths do not rise at entry " + std::to_string(i),
                    "strictly rising wavelengths");
        }
    }
};

}  // namespace

std::vector<Problem> problems_of(const SceneParts& parts) {
    Findings found{.parts = parts, .problems = {}};
    for (const Material& material : parts.materials) found.need_table(material);
    for (const Object& object : parts.objects)
        if (object.material < 0 || static_cast<std::size_t>(object.material) >= parts.materials.size())
            found.add("object '" + object.name + "' has material " + std::to_string(object.material) +
                          ", which does not exist",
                      "a number below " + std::to_string(parts.materials.size()));
    found.examine(parts.planes, "plane", [&](const Plane& plane, const std::string& name) {
        found.need_place(plane.point, name + ": the point");
        found.need_unit(plane.normal, name + ": the normal");
    });
    found.examine(parts.boxes, "box", [&](const Box& box, const std::string& name) {
        found.need_place(box.centre, name + ": the centre");
        for (const double size : box.half_size) found.need_size(size, name + ": a half size");
        if (!rotation(box.rotation))
            found.add(name + ": the rotation is none", "an orthogonal matrix of determinant 1");
    });
    found.examine(parts.spheres, "sphere", [&](const Sphere& sphere, const std::string& name) {
        found.need_place(sphere.centre, name + ": the centre");
        found.need_size(sphere.radius, name + ": the radius");
    });
    found.examine(parts.cylinders, "cylinder", [&](const Cylinder& cylinder, const std::string& name) {
        found.need_place(cylinder.base, name + ": the base");
        found.need_unit(cylinder.axis, name + ": the axis");
        found.need_size(cylinder.length, name + ": the length");
        found.need_size(cylinder.radius, name + ": the radius");
    });
    found.examine(parts.meshes, "mesh",
                  [&](const Mesh& mesh, const std::string& name) { found.need_corners(mesh, name); });
    return std::move(found.problems);
}

}  // namespace glint
