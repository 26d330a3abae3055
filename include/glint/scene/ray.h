// A ray: the part of a half line that a query looks at.
#pragma once

#include <glint/core/vector.h>

#include <limits>

namespace glint {

/// The points origin + distance * direction with near < distance <= far, metres.
struct Ray {
    Vec3 origin = Vec3::Zero();
    Vec3 direction = Vec3::UnitX();  ///< unit length
    double near = 0;
    double far = std::numeric_limits<double>::infinity();
};

}  // namespace glint
