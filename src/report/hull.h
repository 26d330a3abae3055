// The convex hull of points.
#pragma once

#include <glint/core/vector.h>
#include <vector>

namespace glint {

/// Corners of the smallest convex polygon around the points, counter-clockwise with v up, no three on a line
/// (Andrew 1979). Fewer than 3 when the points do not span an area.
[[nodiscard]] std::vector<Vec2> convex_hull_of(std::vector<Vec2> points);

}  // namespace glint
