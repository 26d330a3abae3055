// Casting rays into a scene: the closest hit, and whether anything is in the way.
#pragma once

#include <glint/scene/ray.h>
#include <glint/scene/scene.h>

#include <optional>

namespace glint {

/// Where a ray meets a surface.
struct Hit {
    double distance = 0;          ///< from the ray's origin, m
    Vec3 point = Vec3::Zero();    ///< on the surface, m
    Vec3 normal = Vec3::UnitZ();  ///< unit, on the side the ray came from
    int object = 0;               ///< index into the scene's objects
    int material = 0;             ///< index into the scene's materials
    double clearance = 0;  ///< how far off_surface steps, m: above all rounding of surfaces in the scene
};

/// The closest surface with near < distance <= far. Surfaces are met from both sides. At exactly equal
/// distances the object with the lower index wins, so that the answer does not depend on the hierarchy.
/// A ray with a NaN or infinite origin, direction or near, a NaN far or a zero direction meets nothing. The
/// direction must be a unit vector to rounding, which is not checked. Allocates nothing.
[[nodiscard]] std::optional<Hit> closest_hit(const Scene& scene, const Ray& ray);

/// Whether any surface has near < distance <= far; same rules, faster.
[[nodiscard]] bool occluded(const Scene& scene, const Ray& ray);

/// Where a shadow ray or bounce from a hit starts: the point pushed off along the normal by hit.clearance,
/// that is 256 units in the last place of the scene's largest coordinate (6e-12 m in a scene of 100 m).
/// A ray from there into the half space of the normal does not meet the flat surface it starts from, whatever
/// the angle. To look at the other side (transmission) push along -normal.
[[nodiscard]] Vec3 off_surface(const Hit& hit);

/// What a closest hit took.
struct CastWork {
    int nodes = 0;       ///< nodes whose bounds were tested
    int primitives = 0;  ///< finite primitives tested
};

/// Counts the work of closest_hit for one ray.
[[nodiscard]] CastWork cast_work(const Scene& scene, const Ray& ray);

}  // namespace glint
