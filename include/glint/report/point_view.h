// A cloud of points in perspective.
#pragma once

#include <glint/report/frame.h>

#include <optional>
#include <string>
#include <vector>

namespace glint {

/// One point: x forward, y left, z up [m], and the value that colours it.
struct Mark {
    Vec3 position = Vec3::Zero();
    double value = 0;  ///< NaN: drawn in grey
};

/// Where the picture is taken from.
struct Viewpoint {
    Vec3 eye = Vec3::Zero();     ///< m
    Vec3 target = Vec3::Zero();  ///< point in the middle of the picture, m
    double field = 0.6;          ///< full vertical field of view [rad], (0, 2.5)
};

enum class Floor { none, grid, rings };

struct PointView {
    Heading heading;
    std::vector<Mark> marks;
    ColourScale colours;
    Vec3 sensor = Vec3::Zero();          ///< place of the sensor, m
    std::optional<Viewpoint> viewpoint;  ///< none: raised, behind and beside the sensor, all marks in view
    Floor floor = Floor::grid;
    std::optional<double> floor_height;  ///< z of the floor grid [m]; none: under the lowest marks
    double mark_scale = 1;               ///< size of the marks against the automatic size
    bool cut_away = true;                ///< surfaces seen from behind become faint dots
    PageSize size = {.width = 1280, .height = 800};
};

/// Draws the cloud: discs that follow the local surface, nearer ones larger, hidden ones hidden, edges of
/// depth shaded; a floor marked in metres, a bar of one to several metres on it, the sensor with its axes.
/// An empty cloud gives the floor and the sensor. Error for positions that are not finite or infinite values.
[[nodiscard]] Canvas draw(const PointView& view);

/// The viewpoint draw() would choose.
[[nodiscard]] Viewpoint automatic_viewpoint(const PointView& view);

}  // namespace glint
