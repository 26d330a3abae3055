// What the scene tests share: random places, bodies made of triangles, and a slow caster of its own.
#pragma once

#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/scene/cast.h>

#include <Eigen/Geometry>
#include <cmath>
#include <limits>
#include <map>
#include <optional>
#include <string>
#include <utility>

namespace glint::testing {

inline double between(RandomStream& random, double low, double high) {
    return low + (high - low) * random.uniform();
}

/// Uniform on the unit sphere.
inline Vec3 random_direction(RandomStream& random) {
    const double z = between(random, -1, 1), angle = between(random, 0, 2 * pi);
    const double across = std::sqrt(1 - z * z);
    return Vec3(across * std::cos(angle), across * std::sin(angle), z).normalized();
}

inline Vec3 random_place(RandomStream& random, double reach) {
    const double x = between(random, -reach, reach), y = between(random, -reach, reach);
    return {x, y, between(random, -reach, reach)};
}

inline Mat3 random_rotation(RandomStream& random) {
    const Vec3 axis = random_direction(random);
    return Eigen::AngleAxisd(between(random, 0, 2 * pi), axis).toRotationMatrix();
}

inline Ray random_ray(RandomStream& random, double reach) {
    const Vec3 origin = random_place(random, reach);
    return {.origin = origin, .direction = random_direction(random)};
}

inline Material grey() { return {.name = "grey", .table = {{.wavelength = 905e-9, .reflectance = 0.5}}}; }

/// A sphere of radius 1 about the origin out of 20 * 4^levels triangles: an icosahedron, halved edge by edge.
inline Mesh ball(int levels) {
    const double g = (1 + std::sqrt(5.0)) / 2;
    Mesh mesh{.vertices = {{-1, g, 0},
                           {1, g, 0},
                           {-1, -g, 0},
                           {1, -g, 0},
                           {0, -1, g},
                           {0, 1, g},
                           {0, -1, -g},
                           {0, 1, -g},
                           {g, 0, -1},
                           {g, 0, 1},
                           {-g, 0, -1},
                           {-g, 0, 1}},
              .triangles = {{{0, 11, 5}}, {{0, 5, 1}},  {{0, 1, 7}},   {{0, 7, 10}}, {{0, 10, 11}},
                            {{1, 5, 9}},  {{5, 11, 4}}, {{11, 10, 2}}, {{10, 7, 6}}, {{7, 1, 8}},
                            {{3, 9, 4}},  {{3, 4, 2}},  {{3, 2, 6}},   {{3, 6, 8}},  {{3, 8, 9}},
                            {{4, 9, 5}},  {{2, 4, 11}}, {{6, 2, 10}},  {{8, 6, 7}},  {{9, 8, 1}}}};
    for (Vec3& vertex : mesh.vertices) vertex.normalize();
    for (int level = 0; level < levels; ++level) {
        std::map<std::pair<int, int>, int> halves;
        const auto half = [&](int a, int b) {
            const auto [at, fresh] =
                halves.try_emplace(std::minmax(a, b), static_cast<int>(mesh.vertices.size()));
            if (fresh) mesh.vertices.push_back((mesh.vertices[a] + mesh.vertices[b]).normalized());
            return at->second;
        };
        std::vector<std::array<int, 3>> finer;
        for (const auto& [a, b, c] : mesh.triangles) {
            const int ab = half(a, b), bc = half(b, c), ca = half(c, a);
            finer.insert(finer.end(), {{a, ab, ca}, {ab, b, bc}, {ca, bc, c}, {ab, bc, ca}});
        }
        mesh.triangles = std::move(finer);
    }
    return mesh;
}

/// Shapes of every kind strewn about, each with an object of its own.
inline SceneParts strewn(std::uint64_t seed, int each, double reach, bool with_planes) {
    RandomStream random(seed);
    SceneParts parts;
    parts.materials = {grey(), {.name = "dark", .table = {{.wavelength = 905e-9, .reflectance = 0.1}}}};
    const auto fresh = [&](const std::string& name) {
        const int number = static_cast<int>(parts.objects.size());
        parts.objects.push_back({.name = name + std::to_string(number), .material = number % 2});
        return number;
    };
    const auto size = [&] { return std::pow(10.0, between(random, -2, -0.5)) * reach; };
    if (with_planes) {
        parts.planes.push_back({{.point = {0, 0, -1.5 * reach}, .normal = Vec3::UnitZ()}, fresh("floor")});
        const Vec3 normal = random_direction(random);
        parts.planes.push_back({{.point = 2 * reach * normal, .normal = normal}, fresh("wall")});
    }
    for (int i = 0; i < each; ++i) {
        const Vec3 half_size(size(), size(), size());
        parts.boxes.push_back({{.centre = random_place(random, reach),
                                .half_size = half_size,
                                .rotation = random_rotation(random)},
                               fresh("box")});
        parts.spheres.push_back({{.centre = random_place(random, reach), .radius = size()}, fresh("sphere")});
        parts.cylinders.push_back({{.base = random_place(random, reach),
                                    .axis = random_direction(random),
                                    .length = size(),
                                    .radius = size()},
                                   fresh("cylinder")});
        const Mat3 linear = random_rotation(random) * size();
        parts.meshes.push_back({transformed(ball(0), linear, random_place(random, reach)), fresh("mesh")});
    }
    return parts;
}

// The slow caster: loops over everything with textbook formulas in long double. `margin` (relative) widens
// every face, or narrows it when negative, without moving it: a surface that only one of both signs meets is
// met at its very rim.

using Real = long double;
using Long3 = Eigen::Matrix<Real, 3, 1>;
inline constexpr Real nothing = std::numeric_limits<Real>::infinity();

struct SlowRay {
    Long3 origin, direction;
    Real near = 0, far = 0, margin = 0;
    [[nodiscard]] Real if_within(Real distance) const {
        return distance > near && distance <= far ? distance : nothing;
    }
    [[nodiscard]] Long3 at(Real distance) const { return origin + distance * direction; }
};

inline Real slow_distance(const Plane& plane, const SlowRay& ray) {
    const Long3 normal = plane.normal.cast<Real>();
    const Real slope = ray.direction.dot(normal);
    if (slope == 0) return nothing;
    return ray.if_within((plane.point.cast<Real>() - ray.origin).dot(normal) / slope);
}

inline Real slow_distance(const Sphere& sphere, const SlowRay& ray) {
    const Long3 from = ray.origin - sphere.centre.cast<Real>();
    const Real radius = sphere.radius, b = from.dot(ray.direction);
    const Real rest = b * b - from.squaredNorm() + radius * radius;
    if (rest < -ray.margin * radius * radius) return nothing;
    const Real root = std::sqrt(std::max<Real>(rest, 0));
    return std::min(ray.if_within(-b - root), ray.if_within(-b + root));
}

inline Real slow_distance(const Box& box, const SlowRay& ray) {
    Real best = nothing;
    for (int face = 0; face < 6; ++face) {
        const int k = face / 2;
        const Vec3 out = box.rotation.col(k) * (face % 2 == 0 ? -1 : 1);
        const Real distance =
            slow_distance(Plane{.point = box.centre + box.half_size[k] * out, .normal = out}, ray);
        if (distance == nothing) continue;
        const Long3 local =
            box.rotation.cast<Real>().transpose() * (ray.at(distance) - box.centre.cast<Real>());
        bool on_face = true;
        for (int j = 0; j < 3; ++j)
            if (j != k && std::abs(local[j]) > box.half_size[j] * (1 + ray.margin)) on_face = false;
        if (on_face) best = std::min(best, distance);
    }
    return best;
}

inline Real slow_distance(const Cylinder& cylinder, const SlowRay& ray) {
    const Long3 axis = cylinder.axis.cast<Real>(), from = ray.origin - cylinder.base.cast<Real>();
    const Real radius = cylinder.radius, length = cylinder.length;
    Real best = nothing;
    for (const Real height : {Real{0}, length}) {
        const Real slope = ray.direction.dot(axis);
        if (slope == 0) continue;
        const Real distance = ray.if_within((height - from.dot(axis)) / slope);
        if (distance == nothing) continue;
        const Long3 on_cap = from + distance * ray.direction - height * axis;
        if (on_cap.squaredNorm() <= radius * radius * (1 + ray.margin)) best = std::min(best, distance);
    }
    const Long3 start = from - from.dot(axis) * axis, slope = ray.direction - ray.direction.dot(axis) * axis;
    const Real a = slope.squaredNorm(), b = start.dot(slope), c = start.squaredNorm() - radius * radius;
    if (a == 0 || b * b - a * c < -ray.margin * a * radius * radius) return best;
    const Real root = std::sqrt(std::max<Real>(b * b - a * c, 0));
    for (const Real t : {(-b - root) / a, (-b + root) / a}) {
        const Real height = (from + t * ray.direction).dot(axis);
        if (height >= -ray.margin * length && height <= length * (1 + ray.margin))
            best = std::min(best, ray.if_within(t));
    }
    return best;
}

/// Solves origin + t direction = a + v (b - a) + w (c - a) by Cramer's rule.
inline Real slow_distance(const Triangle& triangle, const SlowRay& ray) {
    const Long3 a = triangle.a.cast<Real>();
    const Long3 ab = triangle.b.cast<Real>() - a, ac = triangle.c.cast<Real>() - a, from = ray.origin - a;
    const Long3 normal = ab.cross(ac);
    const Real slope = -ray.direction.dot(normal);
    if (slope == 0) return nothing;
    const Long3 turned = from.cross(ray.direction);
    const Real t = from.dot(normal) / slope, v = ac.dot(turned) / slope, w = -ab.dot(turned) / slope;
    if (v < -ray.margin || w < -ray.margin || 1 - v - w < -ray.margin) return nothing;
    return ray.if_within(t);
}

/// The closest distance over all shapes, or over those of one object.
inline double slow_closest(const SceneParts& parts, const Ray& ray, double margin,
                           std::optional<int> object = {}) {
    const SlowRay slow{.origin = ray.origin.cast<Real>(),
                       .direction = ray.direction.cast<Real>(),
                       .near = ray.near,
                       .far = ray.far,
                       .margin = margin};
    Real best = nothing;
    const auto look = [&](const auto& shapes) {
        for (const auto& placed : shapes)
            if (!object || placed.object == *object) best = std::min(best, slow_distance(placed.shape, slow));
    };
    look(parts.planes);
    look(parts.boxes);
    look(parts.spheres);
    look(parts.cylinders);
    for (const auto& [mesh, owner] : parts.meshes)
        for (const auto& [a, b, c] : mesh.triangles)
            if (!object || owner == *object)
                best = std::min(
                    best,
                    slow_distance(Triangle{mesh.vertices[a], mesh.vertices[b], mesh.vertices[c]}, slow));
    return static_cast<double>(best);
}

/// How a hit compares with the slow caster: empty when they agree, else what is wrong.
inline std::string disagreement(const SceneParts& parts, const Ray& ray, const std::optional<Hit>& hit) {
    // Both work near 1e-15 of the coordinates; a ray that touches a curved surface turns that into its root.
    constexpr double margin = 1e-9, tolerance = 1e-6;
    const double narrow = slow_closest(parts, ray, -margin);
    if (!hit) return std::isinf(narrow) ? "" : "missed a surface at " + std::to_string(narrow);
    const double wide = slow_closest(parts, ray, margin);
    if (hit->distance > narrow + tolerance) return "passed a surface at " + std::to_string(narrow);
    if (hit->distance < wide - tolerance) return "no surface at " + std::to_string(hit->distance);
    const double own = slow_closest(parts, ray, margin, hit->object);
    if (!(std::abs(own - hit->distance) <= tolerance)) return "wrong object";
    return "";
}

}  // namespace glint::testing
