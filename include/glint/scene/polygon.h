// Cutting polygons into triangles.
#pragma once

#include <glint/core/vector.h>

#include <array>
#include <span>
#include <vector>

namespace glint {

/// Cuts a simple polygon, convex or not, into corners - 2 triangles of corner numbers by clipping ears
/// (Meisters 1975) in the projection along its area vector. Corners on a straight line and corners that
/// coincide are kept, as triangles without area, so that polygons next to it still share all vertices.
/// Returns nothing for fewer than three corners, no area, or outlines that cross themselves.
[[nodiscard]] std::vector<std::array<int, 3>> cut_polygon(std::span<const Vec3> corners);

}  // namespace glint
