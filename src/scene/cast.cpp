// Casting rays into a scene: the closest hit, and whether anything is in the way.
#include <glint/scene/cast.h>
#include <glint/scene/descend.h>
#include <glint/scene/intersect.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace glint {
namespace {

bool castable(const Ray& ray) {
    return ray.origin.allFinite() && ray.direction.allFinite() && ray.direction.squaredNorm() > 0 &&
           std::isfinite(ray.near) && ray.far > ray.near;  // false for a NaN far
}

// The surface found so far. `number` orders the surfaces of one object: finite ones as they were given, then
// planes.
struct Candidate {
    double distance = no_distance;
    int object = std::numeric_limits<int>::max();
    std::uint32_t number = std::numeric_limits<std::uint32_t>::max();
    bool finite = false;  // whether `index` is into the primitives, else into the planes
    std::uint32_t index = 0;
};

bool before(const Candidate& a, const Candidate& b) {
    if (a.distance != b.distance) return a.distance < b.distance;
    if (a.object != b.object) return a.object < b.object;
    return a.number < b.number;
}

struct Placing {
    double distance = no_distance;
    int object = 0;
};

Placing test(const Scene& scene, Primitive primitive, const Ray& ray, const ShearedRay& sheared_ray) {
    const auto found = [&](const auto& placed) {
        return Placing{distance_to(placed.shape, ray), placed.object};
    };
    switch (primitive.kind) {
        case PrimitiveKind::triangle: {
            const Placed<Triangle>& placed = scene.triangles[primitive.index];
            return {distance_to(placed.shape, sheared_ray, ray), placed.object};
        }
        case PrimitiveKind::box:
            return found(scene.boxes[primitive.index]);
        case PrimitiveKind::sphere:
            return found(scene.spheres[primitive.index]);
        case PrimitiveKind::cylinder:
            return found(scene.cylinders[primitive.index]);
    }
    return {};
}

Candidate closest_plane(const Scene& scene, const Ray& ray) {
    Candidate best;
    for (std::uint32_t i = 0; i < scene.planes.size(); ++i) {
        const auto& [plane, object] = scene.planes[i];
        const double distance = distance_to(plane, ray);
        if (distance == no_distance) continue;
        const Candidate candidate = {.distance = distance,
                                     .object = object,
                                     .number = static_cast<std::uint32_t>(scene.primitives.size()) + i,
                                     .finite = false,
                                     .index = i};
        if (before(candidate, best)) best = candidate;
    }
    return best;
}

struct Found {
    Candidate candidate;
    CastWork work;
};

Found search(const Scene& scene, const Ray& whole_ray) {
    Found found{.candidate = closest_plane(scene, whole_ray), .work = {}};
    Candidate& best = found.candidate;
    Ray ray = whole_ray;
    ray.far = std::min(ray.far, best.distance);
    const ShearedRay sheared_ray = sheared(ray);
    found.work.nodes =
        descend(scene.hierarchy, ray, [&](std::uint32_t first, std::uint32_t count, double far) {
            found.work.primitives += static_cast<int>(count);
            for (std::uint32_t i = first; i < first + count; ++i) {
                const Placing placing = test(scene, scene.primitives[i], ray, sheared_ray);
                if (placing.distance == no_distance) continue;
                const Candidate candidate = {.distance = placing.distance,
                                             .object = placing.object,
                                             .number = scene.hierarchy.order[i],
                                             .finite = true,
                                             .index = i};
                if (!before(candidate, best)) continue;
                best = candidate;
                ray.far = far = best.distance;
            }
            return far;
        });
    return found;
}

SurfacePoint surface_of(const Scene& scene, const Candidate& found, const Ray& ray) {
    if (!found.finite) return surface_at(scene.planes[found.index].shape, ray, found.distance);
    const auto [kind, index] = scene.primitives[found.index];
    switch (kind) {
        case PrimitiveKind::triangle:
            return surface_at(scene.triangles[index].shape, ray);
        case PrimitiveKind::box:
            return surface_at(scene.boxes[index].shape, ray, found.distance);
        case PrimitiveKind::sphere:
            return surface_at(scene.spheres[index].shape, ray, found.distance);
        case PrimitiveKind::cylinder:
            return surface_at(scene.cylinders[index].shape, ray, found.distance);
    }
    return {};
}

}  // namespace

std::optional<Hit> closest_hit(const Scene& scene, const Ray& ray) {
    if (!castable(ray)) return {};
    const Candidate found = search(scene, ray).candidate;
    if (found.distance == no_distance) return {};
    const SurfacePoint surface = surface_of(scene, found, ray);
    const double coordinate = std::max(scene.extent, surface.point.cwiseAbs().maxCoeff());
    return Hit{.distance = found.distance,
               .point = surface.point,
               .normal = surface.normal,
               .object = found.object,
               .material = scene.objects[static_cast<std::size_t>(found.object)].material,
               .clearance = 256 * std::numeric_limits<double>::epsilon() * coordinate};
}

bool occluded(const Scene& scene, const Ray& ray) {
    if (!castable(ray)) return false;
    for (const auto& [plane, object] : scene.planes)
        if (distance_to(plane, ray) != no_distance) return true;
    const ShearedRay sheared_ray = sheared(ray);
    bool blocked = false;
    descend(scene.hierarchy, ray, [&](std::uint32_t first, std::uint32_t count, double far) {
        for (std::uint32_t i = first; i < first + count && !blocked; ++i)
            blocked = test(scene, scene.primitives[i], ray, sheared_ray).distance != no_distance;
        return blocked ? -no_distance : far;
    });
    return blocked;
}

Vec3 off_surface(const Hit& hit) { return hit.point + hit.clearance * hit.normal; }

CastWork cast_work(const Scene& scene, const Ray& ray) {
    return castable(ray) ? search(scene, ray).work : CastWork{};
}

}  // namespace glint
