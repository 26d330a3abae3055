// Axis-aligned bounds of shapes.
#include <glint/scene/bounds.h>
#include <glint/scene/triangle.h>

#include <cmath>

namespace glint {

double half_area(const Bounds& bounds) {
    if (bounds.empty()) return 0;
    const Vec3 side = bounds.high - bounds.low;
    return side.x() * side.y() + side.y() * side.z() + side.z() * side.x();
}

Bounds bounds_of(const Box& box) {
    const Vec3 reach = box.rotation.cwiseAbs() * box.half_size;
    return {.low = box.centre - reach, .high = box.centre + reach};
}

Bounds bounds_of(const Sphere& sphere) {
    return {.low = sphere.centre.array() - sphere.radius, .high = sphere.centre.array() + sphere.radius};
}

Bounds bounds_of(const Cylinder& cylinder) {
    // A disc of radius r across the axis n reaches r sqrt(1 - n_k^2) along axis k.
    const Vec3 reach = cylinder.radius * (1 - cylinder.axis.array().square()).max(0).sqrt();
    const Vec3 top = cylinder.base + cylinder.length * cylinder.axis;
    return {.low = cylinder.base.cwiseMin(top) - reach, .high = cylinder.base.cwiseMax(top) + reach};
}

Bounds bounds_of(const Triangle& triangle) {
    Bounds bounds;
    bounds.add(triangle.a);
    bounds.add(triangle.b);
    bounds.add(triangle.c);
    return bounds;
}

}  // namespace glint
