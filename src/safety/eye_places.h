// Places of the eye at one distance, for search_eyes().
#pragma once

#include <glint/optics/far_field.h>

#include <vector>

namespace glint {

/// Every place of a raster that some beam may reach, module frame [m]: a square raster over (y, z) of the
/// unit direction, half a pupil radius apart or as far as the finest beam asks for (a fifth of its 1/e2
/// radius there, half the width of an edge), whichever is more, and at most 0.06 rad.
[[nodiscard]] std::vector<Vec3> all_places(const FarField& field, double distance, double pupil_radius);

/// The middle, the corners and the edges of what the beams' axes cover.
[[nodiscard]] std::vector<Vec3> few_places(const FarField& field, double distance);

}  // namespace glint
