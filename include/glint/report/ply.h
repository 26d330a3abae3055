// Points as a PLY file.
#pragma once

#include <glint/plan/assessment.h>
#include <span>
#include <string>

namespace glint {

/// Binary little-endian PLY 1.0: x, y, z [m, scene frame] and range [m], signal [counts], precision [m],
/// probability as float; zone, column, row, object as int; 44 bytes a point. Comments in the header name the
/// object numbers and carry the caution.
[[nodiscard]] std::string points_ply(std::span<const Point> points,
                                     std::span<const std::string> object_names);

}  // namespace glint
