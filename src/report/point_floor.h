// The floor under a cloud of points, the bar of scale on it, and the sensor with its axes.
#pragma once

#include <glint/core/vector.h>
#include "report/camera.h"
#include "report/splats.h"

namespace glint {

/// A rectangle of floor, its sides on whole multiples of `step`.
struct FloorPlan {
    double height = 0;                             ///< z, m
    double step = 1;                               ///< between lines, m: 1, 2 or 5 times a power of ten
    Vec2 low = Vec2::Zero(), high = Vec2::Zero();  ///< x and y of its corners, m
    Vec2 foot = Vec2::Zero();                      ///< below the sensor, m

    [[nodiscard]] double size() const { return (high - low).maxCoeff(); }
    /// Corners of the floor with the border that numbers and bar need, seen from beyond the low corner.
    [[nodiscard]] std::vector<Vec3> corners() const;
};

/// The floor under a box of space, with 6 to 16 lines along its longer side.
[[nodiscard]] FloorPlan plan_floor(const Vec3& low, const Vec3& high, const Vec3& sensor, double height);

/// Draws the lines of the floor where nothing hides them; `slack` as in draw_line.
void draw_floor(Canvas& canvas, const DepthMap& depths, const Camera& camera, const FloorPlan& plan,
                Floor kind, double slack);

/// Writes metres along the sides nearest to the eye and lays a bar of scale beside them. Numbers that would
/// touch others or leave `plot` are left out.
void label_floor(Canvas& canvas, const Camera& camera, const FloorPlan& plan, Floor kind,
                 const PageBox& plot);

/// Draws the sensor's place: three named axes and a plumb line to the floor.
void draw_sensor(Canvas& canvas, const Camera& camera, const FloorPlan& plan, const Vec3& sensor,
                 const PageBox& plot);

}  // namespace glint
