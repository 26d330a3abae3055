// Collection: how much of each zone's light passes an aperture in front of the module.
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

std::vector<ZoneEnergy> collected_energies(const FarField& field, const Aperture& aperture, double pulse_width) {
    std::vector<ZoneEnergy> energies;
    const double distance = aperture.centre.norm();
    // Beams start up to `spread` beside the origin, have a width there, and need only touch the rim.
    const double beside = (aperture.radius + field.spread + 3 * field.widest_exit) / distance;
    const double reach = beside < 1 ? field.reach + std::asin(beside) : 2;
    beams_near(field, aperture.centre / distance, reach, [&](const Beam& beam) {
        const double share = collected_share(beam, aperture);
        if (share > 0) energies.push_back({beam.zone, share * beam.power * pulse_width});
    });
    std::ranges::stable_sort(energies, {}, &ZoneEnergy::zone);
    std::size_t kept = 0;
    for (std::size_t i = 0; i < energies.size(); ++i) {
        if (kept > 0 && energies[kept - 1].zone == energies[i].zone)
            energies[kept - 1].energy += energies[i].energy;
        else
            energies[kept++] = energies[i];
    }
    energies.resize(kept);
    return energies;
}

}  // namespace glint
