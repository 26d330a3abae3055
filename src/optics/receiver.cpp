// Receiver optics: pixels to directions, and how much light each collects.
#include <glint/core/constants.h>
#include <glint/optics/receiver.h>

#include <cmath>

namespace glint {

Vec3 receiver_position(const Receiver& receiver) { return {0, -receiver.right, receiver.up}; }

PixelRay pixel_ray(const Receiver& receiver, int column, int row, const Vec2& within) {
    const Pixels& pixels = receiver.pixels;
    const double f = receiver.lens.focal_length;
    const double u =
        (column + within.x() - pixels.columns / 2.0) * pixels.pitch / f;         // to the right in the field
    const double v = (pixels.rows / 2.0 - row - within.y()) * pixels.pitch / f;  // up in the field
    const double r = std::hypot(u, v);
    const double area = pixels.pitch * pixels.pitch * pixels.fill_factor / (f * f);
    if (receiver.lens.mapping == LensMapping::tangent) {
        const double cosine = 1 / std::sqrt(1 + r * r);
        return {cosine * Vec3(1, -u, v), area * cosine * cosine * cosine, cosine};
    }
    const double sine_over = r > 1e-9 ? std::sin(r) / r : 1.0;
    return {Vec3(std::cos(r), -u * sine_over, v * sine_over), area * sine_over, std::cos(r)};
}

double pupil_area(const ReceiverLens& lens) {
    const double diameter = lens.focal_length / lens.f_number;
    return pi / 4 * diameter * diameter;
}

Vec2 field_of_view(const Receiver& receiver) {
    const Vec2 half = Vec2(receiver.pixels.columns, receiver.pixels.rows) * receiver.pixels.pitch /
                      (2 * receiver.lens.focal_length);
    if (receiver.lens.mapping == LensMapping::f_theta) return 2 * half;
    return {2 * std::atan(half.x()), 2 * std::atan(half.y())};
}

}  // namespace glint
