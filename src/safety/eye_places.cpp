// Places of the eye at one distance.
#include "eye_places.h"

#include <algorithm>
#include <cmath>

namespace glint {

std::vector<Vec3> all_places(const FarField& field, double distance, double pupil_radius) {
    struct Disc {
        Vec2 middle;
        double reach;
    };
    std::vector<Disc> discs;
    double finest = 1e9;
    for (const Beam& beam : field.beams) {
        const double aside = (field.alike ? field.spread : beam.origin.norm()) + 3 * beam.exit_radius;
        discs.push_back(
            {{beam.axis.y(), beam.axis.z()}, std::min(std::atan(beam.kernel.reach) + aside / distance, 1.5)});
        const bool gaussian = beam.kernel.shape == KernelShape::gaussian;
        finest = std::min(
            finest, gaussian ? 0.2 * radius_at(beam, distance) : 0.5 * finest_width(beam.kernel) * distance);
        if (field.alike) break;
    }
    Vec2 low = Vec2::Constant(0.97), high = -low;
    for (const Disc& disc : discs) {
        low = low.cwiseMin(disc.middle - Vec2::Constant(disc.reach));
        high = high.cwiseMax(disc.middle + Vec2::Constant(disc.reach));
    }
    low = low.cwiseMax(-0.97), high = high.cwiseMin(0.97);
    const double step = std::min(std::max(pupil_radius / 2, finest) / distance, 0.06);
    // The middle of the field lies on the raster.
    const Vec2 middle = (low + high) / 2;
    const int across = static_cast<int>((high.x() - middle.x()) / step);
    const int up = static_cast<int>((high.y() - middle.y()) / step);
    const auto index = [&](int i, int k) {
        return static_cast<std::size_t>(i + across) * (2 * up + 1) + static_cast<std::size_t>(k + up);
    };
    std::vector<bool> taken(index(across, up) + 1);
    std::vector<Vec3> places;
    for (const Disc& disc : discs) {
        const Vec2 from = (disc.middle - middle - Vec2::Constant(disc.reach)) / step,
                   to = (disc.middle - middle + Vec2::Constant(disc.reach)) / step;
        const int left = std::max(-across, static_cast<int>(std::ceil(from.x()))),
                  right = std::min(across, static_cast<int>(std::floor(to.x()))),
                  bottom = std::max(-up, static_cast<int>(std::ceil(from.y()))),
                  top = std::min(up, static_cast<int>(std::floor(to.y())));
        for (int i = left; i <= right; ++i)
            for (int k = bottom; k <= top; ++k) {
                if (taken[index(i, k)]) continue;
                taken[index(i, k)] = true;
                const Vec2 at = middle + step * Vec2(i, k);
                const double x2 = 1 - at.squaredNorm();
                if (x2 > 0.04) places.push_back(distance * Vec3(std::sqrt(x2), at.x(), at.y()));
            }
    }
    return places;
}

std::vector<Vec3> few_places(const FarField& field, double distance) {
    Vec2 low(1, 1), high(-1, -1);
    for (const Beam& beam : field.beams) {
        const Vec2 axis(beam.axis.y(), beam.axis.z());
        low = low.cwiseMin(axis), high = high.cwiseMax(axis);
    }
    std::vector<Vec3> places;
    for (const double y : {low.x(), (low.x() + high.x()) / 2, high.x()})
        for (const double z : {low.y(), (low.y() + high.y()) / 2, high.y()})
            if (const double x2 = 1 - y * y - z * z; x2 > 0.04)
                places.push_back(distance * Vec3(std::sqrt(x2), y, z));
    return places;
}

}  // namespace glint
