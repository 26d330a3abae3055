// Shapes with a closed formula, in metres. All are seen from both sides.
#pragma once

#include <glint/core/vector.h>

namespace glint {

/// The infinite plane of all x with (x - point) . normal = 0.
struct Plane {
    Vec3 point = Vec3::Zero();
    Vec3 normal = Vec3::UnitZ();  ///< unit length
};

/// The box of all centre + rotation * y with |y_k| <= half_size_k.
struct Box {
    Vec3 centre = Vec3::Zero();
    Vec3 half_size = Vec3::Ones();     ///< all above 0
    Mat3 rotation = Mat3::Identity();  ///< columns: the directions of the box's own axes
};

/// The ball |x - centre| <= radius.
struct Sphere {
    Vec3 centre = Vec3::Zero();
    double radius = 1;  ///< above 0
};

/// The solid cylinder base + s * axis + r, 0 <= s <= length, r across the axis, |r| <= radius; with caps.
struct Cylinder {
    Vec3 base = Vec3::Zero();   ///< centre of the cap the axis starts from
    Vec3 axis = Vec3::UnitZ();  ///< unit length
    double length = 1;          ///< above 0
    double radius = 1;          ///< above 0
};

}  // namespace glint
