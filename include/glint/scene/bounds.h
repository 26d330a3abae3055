// Axis-aligned bounds.
#pragma once

#include <glint/core/vector.h>
#include <glint/scene/shape.h>

#include <limits>

namespace glint {

/// All points with low <= x <= high, metres. Empty (low above high) when nothing was added.
struct Bounds {
    Vec3 low = Vec3::Constant(std::numeric_limits<double>::infinity());
    Vec3 high = Vec3::Constant(-std::numeric_limits<double>::infinity());

    [[nodiscard]] bool empty() const { return !(low.array() <= high.array()).all(); }
    [[nodiscard]] Vec3 centre() const { return 0.5 * (low + high); }
    void add(const Vec3& point) {
        low = low.cwiseMin(point);
        high = high.cwiseMax(point);
    }
    void add(const Bounds& other) {
        low = low.cwiseMin(other.low);
        high = high.cwiseMax(other.high);
    }
};

/// Half the surface [m^2]: xy + yz + zx of the sides; 0 for empty bounds (never the inf or NaN that their
/// corners would give, which would silently spoil every comparison of costs).
[[nodiscard]] double half_area(const Bounds& bounds);

/// Tight bounds up to rounding.
[[nodiscard]] Bounds bounds_of(const Box& box);
[[nodiscard]] Bounds bounds_of(const Sphere& sphere);
[[nodiscard]] Bounds bounds_of(const Cylinder& cylinder);

}  // namespace glint
