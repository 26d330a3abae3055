// Collection: how much of a beam passes an aperture in front of the module.
#include <glint/core/constants.h>
#include <glint/safety/collection.h>

#include <algorithm>
#include <cmath>

namespace glint {
namespace {

// Below this reach a beam's cross-section is flat enough for the closed form: cos(0.15) = 0.989.
constexpr double narrow = 0.15;

double share_of_narrow(const Beam& beam, const Aperture& aperture, double along, double beside) {
    const double width = radius_at(beam, along);
    if (width <= 0) return beside <= aperture.radius ? 1 : 0;
    if (beside > aperture.radius + 3 * width) return 0;
    if (beside + 3 * width < aperture.radius) return 1;
    return captured_share(gaussian_kernel(width, width), 1, beside, aperture.radius);
}

double share_of_wide(const Beam& beam, const Aperture& aperture) {
    const Vec3 forward = aperture.centre.normalized();
    const Vec3 right =
        forward.cross(std::abs(forward.z()) < 0.9 ? Vec3::UnitZ() : Vec3::UnitY()).normalized();
    const Vec3 up = right.cross(forward);
    const auto passing = [&](const Vec2& at) {
        const Vec3 path = aperture.centre + at.x() * right + at.y() * up - beam.origin;
        const double squared = path.squaredNorm();
        const Vec3 direction = path / std::sqrt(squared);
        return intensity(beam, direction) * std::max(0.0, direction.dot(forward)) / squared;
    };
    // Disc rule of degree 5 (Abramowitz and Stegun 25.4.61): the middle, and six points at sqrt(2/3) of the radius.
    double sum = passing(Vec2::Zero()) / 4;
    const double ring = aperture.radius * std::sqrt(2.0 / 3);
    for (int i = 0; i < 6; ++i) sum += passing(ring * Vec2(std::cos(pi / 3 * i), std::sin(pi / 3 * i))) / 8;
    return std::min(1.0, sum * pi * aperture.radius * aperture.radius / beam.power);
}

}  // namespace

double collected_share(const Beam& beam, const Aperture& aperture) {
    const Vec3 path = aperture.centre - beam.origin;
    const double along = path.dot(beam.axis);
    if (beam.kernel.shape != KernelShape::gaussian || beam.kernel.reach > narrow)
        return share_of_wide(beam, aperture);
    if (along <= 0) return 0;
    return share_of_narrow(beam, aperture, along, (path - along * beam.axis).norm());
}

}  // namespace glint
