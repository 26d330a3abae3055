// Small vector aliases. Scene frame: x forward, y left, z up, metres.
#pragma once

#include <Eigen/Core>
#include <Eigen/Geometry>  // cross products

namespace glint {

using Vec2 = Eigen::Vector2d;
using Vec3 = Eigen::Vector3d;
using Mat3 = Eigen::Matrix3d;

}  // namespace glint
