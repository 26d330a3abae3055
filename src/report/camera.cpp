// Perspective: what shows where, and where to stand.
#include "report/camera.h"

#include <glint/core/error.h>

#include <Eigen/Geometry>
#include <algorithm>
#include <cmath>

namespace glint {

Sight Camera::see(const Vec3& point) const {
    const Vec3 offset = point - eye;
    const double depth = offset.dot(forward);
    if (depth <= 0) return {.at = centre, .depth = depth};
    return {.at = centre + focal / depth * Vec2{offset.dot(right), -offset.dot(up)}, .depth = depth};
}

Vec3 Camera::ray(const Vec2& at) const {
    const Vec2 offset = (at - centre) / focal;
    return forward + offset.x() * right - offset.y() * up;
}

Camera camera_of(const Viewpoint& viewpoint, const PageBox& plot) {
    const Vec3 sight = viewpoint.target - viewpoint.eye;
    const bool good = viewpoint.eye.allFinite() && viewpoint.target.allFinite() && viewpoint.field > 0 &&
                      viewpoint.field < 2.5 && sight.head<2>().norm() > 1e-6 * sight.norm() &&
                      sight.norm() > 0;
    if (!good)
        throw Error(
            Problem{.what = "a viewpoint gives no picture",
                    .accepted = "eye and target apart and not above each other, a field from 0 to 2.5 rad"});
    Camera camera{.eye = viewpoint.eye, .centre = plot.centre()};
    camera.forward = sight.normalized();
    camera.right = camera.forward.cross(Vec3::UnitZ()).normalized();
    camera.up = camera.right.cross(camera.forward);
    camera.focal = plot.height() / 2 / std::tan(viewpoint.field / 2);
    return camera;
}

Viewpoint viewpoint_around(std::span<const Vec3> points, const Vec3& direction, double width_over_height,
                           double filling) {
    Vec3 low = points[0], high = points[0];
    for (const Vec3& point : points) low = low.cwiseMin(point), high = high.cwiseMax(point);
    const Vec3 away = direction.normalized();
    const double size = std::max((high - low).norm(), 1e-3);
    Viewpoint viewpoint{.eye = Vec3::Zero(), .target = (low + high) / 2};
    const PageBox page{-width_over_height, -1, width_over_height, 1};
    double distance = 3 * size;
    // Moving the target and the eye by what the last picture missed settles quickly: perspective changes
    // little.
    for (int round = 0; round < 40; ++round) {
        viewpoint.eye = viewpoint.target + distance * away;
        const Camera camera = camera_of(viewpoint, page);
        Vec2 first{1e300, 1e300}, last{-1e300, -1e300};
        double nearest = 1e300;
        for (const Vec3& point : points) {
            const Sight sight = camera.see(point);
            nearest = std::min(nearest, sight.depth);
            first = first.cwiseMin(sight.at), last = last.cwiseMax(sight.at);
        }

        const Vec2 middle = (first + last) / 2, half = (last - first) / 2;
        const double used = std::max(half.x() / width_over_height, half.y());
        viewpoint.target += (middle.x() * camera.right - middle.y() * camera.up) * (distance / camera.focal);
        // Never so close that a point comes near the eye, however slim the points look from there.
        distance = std::max(distance * std::clamp(used / filling, 0.7, 1.5), distance - nearest + 0.1 * size);
    }
    viewpoint.eye = viewpoint.target + distance * away;
    return viewpoint;
}

}  // namespace glint
