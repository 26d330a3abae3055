// Where a single ray meets a single shape.
#pragma once

#include <glint/scene/ray.h>
#include <glint/scene/shape.h>
#include <glint/scene/triangle.h>

#include <limits>

namespace glint {

/// The distance of a ray that meets nothing.
inline constexpr double no_distance = std::numeric_limits<double>::infinity();

/// The smallest distance [m] with near < distance <= far at which the ray meets the surface; no_distance when
/// it does not. Rays that start inside a shape meet it from within. The ray must be finite and unit.
[[nodiscard]] double distance_to(const Plane& plane, const Ray& ray);
[[nodiscard]] double distance_to(const Box& box, const Ray& ray);
[[nodiscard]] double distance_to(const Sphere& sphere, const Ray& ray);
[[nodiscard]] double distance_to(const Cylinder& cylinder, const Ray& ray);
[[nodiscard]] inline double distance_to(const Triangle& triangle, const ShearedRay& sheared_ray,
                                        const Ray& ray) {
    const double distance = crossing(triangle, sheared_ray).distance;
    return distance > ray.near && distance <= ray.far ? distance : no_distance;
}

/// A point of a surface and the normal there.
struct SurfacePoint {
    Vec3 point = Vec3::Zero();
    Vec3 normal = Vec3::UnitZ();  ///< unit, on the side the ray came from
};

/// The point of the surface that `distance_to` found at this distance, put back onto the surface so that its
/// error is a few roundings of the shape's coordinates however far the ray came. A triangle without area has
/// the ray's direction reversed as its normal.
[[nodiscard]] SurfacePoint surface_at(const Plane& plane, const Ray& ray, double distance);
[[nodiscard]] SurfacePoint surface_at(const Box& box, const Ray& ray, double distance);
[[nodiscard]] SurfacePoint surface_at(const Sphere& sphere, const Ray& ray, double distance);
[[nodiscard]] SurfacePoint surface_at(const Cylinder& cylinder, const Ray& ray, double distance);
[[nodiscard]] SurfacePoint surface_at(const Triangle& triangle, const Ray& ray);

}  // namespace glint
