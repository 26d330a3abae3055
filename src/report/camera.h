// A perspective camera for pictures of points in space.
#pragma once

#include <glint/core/vector.h>
#include <glint/report/canvas.h>
#include <glint/report/point_view.h>

#include <span>

namespace glint {

/// Where a point of space shows on the page.
struct Sight {
    Vec2 at = Vec2::Zero();  ///< page units
    double depth = 0;        ///< along the line of sight, m; not above 0: behind the eye
};

struct Camera {
    Vec3 eye = Vec3::Zero();
    Vec3 right = Vec3::UnitX(), up = Vec3::UnitZ(), forward = Vec3::UnitY();
    double focal = 1;            ///< page units for one radian at the centre
    Vec2 centre = Vec2::Zero();  ///< page units

    [[nodiscard]] Sight see(const Vec3& point) const;
    /// Direction through a page position, scaled so that its part along `forward` is 1.
    [[nodiscard]] Vec3 ray(const Vec2& at) const;
};

/// The camera of a viewpoint whose vertical field fills `plot`. Error when eye and target coincide, the line
/// of sight is vertical, or the field is outside (0, 2.5) rad.
[[nodiscard]] Camera camera_of(const Viewpoint& viewpoint, const PageBox& plot);

/// The viewpoint from `direction` (target to eye) that shows all `points` as large as a picture of the given
/// width over height allows, `filling` of it (share of its width and height).
[[nodiscard]] Viewpoint viewpoint_around(std::span<const Vec3> points, const Vec3& direction,
                                         double width_over_height, double filling);

}  // namespace glint
