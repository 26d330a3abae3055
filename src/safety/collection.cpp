// Collection: how much of a beam passes an aperture in front of the module.
#include <glint/core/constants.h>
#include <glint/safety/collection.h>

#include <algorithm>
#include <array>
#include <cmath>

namespace glint {
namespace {

// Below this reach a beam's cross-section is flat enough for the closed form: cos(0.15) = 0.989.
constexpr double narrow = 0.15;

// Share of a round Gaussian of 1/e2 radius w that lies in a disc of radius R a distance d beside its middle:
// the sum of chords, sqrt(2/pi)/w exp(-2 (x - d)^2/w^2) erf(sqrt(2 (R^2 - x^2))/w) dx with x = R sin(phi),
// over the 3.2 w around the middle that hold all but 1e-9 of it. Gauss-Legendre on three or six pieces; good
// to 4e-4.
double disc_share(double d, double R, double w) {
    constexpr std::array<double, 5> node{-0.906179845938664, -0.538469310105683, 0, 0.538469310105683,
                                         0.906179845938664};
    constexpr std::array<double, 5> weight{0.236926885056189, 0.478628670499366, 0.568888888888889,
                                           0.478628670499366, 0.236926885056189};
    const int pieces = 2 * w < R ? 6 : 3;  // chords near the rim of a wide disc change fast
    const double from = std::asin(std::clamp((d - 3.2 * w) / R, -1.0, 1.0)),
                 to = std::asin(std::clamp((d + 3.2 * w) / R, -1.0, 1.0));
    const double half = (to - from) / (2 * pieces);
    double sum = 0;
    for (int piece = 0; piece < pieces; ++piece)
        for (std::size_t i = 0; i < node.size(); ++i) {
            const double phi = from + half * (2 * piece + 1 + node[i]), x = R * std::sin(phi),
                         y = R * std::cos(phi);
            sum +=
                weight[i] * y * std::exp(-2 * (x - d) * (x - d) / (w * w)) * std::erf(std::sqrt(2.0) * y / w);
        }
    return std::min(1.0, sum * half * std::sqrt(2 / pi) / w);
}

double share_of_narrow(const Beam& beam, const Aperture& aperture, double along, double beside) {
    const double width = radius_at(beam, along);
    if (width <= 0) return beside <= aperture.radius ? 1 : 0;
    if (beside > aperture.radius + 3 * width) return 0;
    if (beside + 3 * width < aperture.radius) return 1;
    return disc_share(beside, aperture.radius, width);
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
    // Disc rule of degree 5 (Abramowitz and Stegun 25.4.61): the middle, and six points at sqrt(2/3) of the
    // radius.
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
