// The surface around each point of a cloud, from its nearest neighbours.
#pragma once

#include <glint/core/vector.h>

#include <span>
#include <vector>

namespace glint {

/// What the nearest neighbours of a point say about the surface it lies on.
struct LocalSurface {
    double spacing =
        0;  ///< distance to the 6th nearest neighbour, the median of the point and its 8 nearest, m; 0: alone
    double closest = 0;          ///< distance to the 3rd nearest, m
    Vec3 normal = Vec3::Zero();  ///< unit normal, either way round; of the plane through the 20 nearest, or
                                 ///< at an edge of the neighbour's plane that the point lies in
    bool flat = false;           ///< there is such a plane
};

/// One for each point. Finite positions.
[[nodiscard]] std::vector<LocalSurface> local_surfaces(std::span<const Vec3> points);

}  // namespace glint
