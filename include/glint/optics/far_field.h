// The far field: which zone sends how much into a direction, found fast among many beams.
#pragma once

#include <glint/optics/beam.h>
#include <algorithm>
#include <cmath>
#include <vector>

namespace glint {

/// Beams sorted by direction. Beams of a zone that share axis and kernel are merged into one at their common
/// middle; their origins differ by less than the chip, which is far below the width of such wide kernels.
struct FarField {
    std::vector<Beam> beams;      ///< merged where possible, in order of the cells
    std::vector<int> cell_first;  ///< [cells_y * cells_z + 1]
    int cells = 1;                ///< cells along each axis of the square of direction (y, z)
    double reach = 0;             ///< largest distance in (y, z) at which a beam still counts
    double spread = 0;            ///< radius of the sphere around the origin that holds all beam origins [m]
    double widest_exit = 0;       ///< largest 1/e2 radius of a beam at its origin [m]
    int zones = 0;
    bool alike = false;  ///< all beams share axis, kernel, curvature and plane of origin: bare arrays, or a
                         ///< diffuser on one
};

/// Whether beams of a zone that share axis and kernel become one. The eye sees them apart, the scene does
/// not.
enum class Merge { no, yes };

[[nodiscard]] FarField far_field(const Beams& beams, Merge merge = Merge::yes);

/// Calls visit(beam) for every beam whose axis lies within `reach` of a unit direction in (y, z), and for
/// some more.
template <class Visit>
void beams_near(const FarField& field, const Vec3& direction, double reach, const Visit& visit) {
    const auto cell = [&](double coordinate) {
        return std::clamp(static_cast<int>((coordinate + 1) / 2 * field.cells), 0, field.cells - 1);
    };
    const int y0 = cell(direction.y() - reach), y1 = cell(direction.y() + reach);
    const int z0 = cell(direction.z() - reach), z1 = cell(direction.z() + reach);
    for (int y = y0; y <= y1; ++y) {
        const std::size_t row = static_cast<std::size_t>(y) * field.cells;
        for (int i = field.cell_first[row + z0]; i < field.cell_first[row + z1 + 1]; ++i)
            visit(field.beams[i]);
    }
}

/// Calls visit(beam, irradiance) for every beam that lights a point of the module's frame; the irradiance is
/// that at peak power on a surface facing the beam: intensity over squared distance [W/m2]. Allocates
/// nothing.
template <class Visit>
void light_at(const FarField& field, const Vec3& point, const Visit& visit) {
    const double distance = point.norm();
    if (!(distance > 0)) return;
    // Beams start up to `spread` beside the origin, so near points are seen under a slightly other direction.
    const double parallax = distance > field.spread ? std::asin(field.spread / distance) : 2.0;
    beams_near(field, point / distance, field.reach + parallax, [&](const Beam& beam) {
        const Vec3 path = point - beam.origin;
        const double squared = path.squaredNorm();
        if (!(squared > 0)) return;
        const double irradiance = intensity(beam, path / std::sqrt(squared)) / squared;
        if (irradiance > 0) visit(beam, irradiance);
    });
}

/// Radiant intensity of a zone in a unit direction, seen from far away [W/sr].
[[nodiscard]] double zone_intensity(const FarField& field, int zone, const Vec3& direction);

/// Solid angle and middle of what a zone lights.
struct ZoneField {
    Vec3 direction = Vec3::Zero();  ///< power-weighted mean, unit
    double solid_angle = 0;  ///< power over peak intensity: the solid angle a uniform field would have [sr]
    double peak = 0;         ///< peak intensity [W/sr]
    double power = 0;        ///< peak power in the beams [W]
};

/// [zones]; peak intensities are searched on the beams' own axes and a raster of 15 by 15 directions over
/// each.
[[nodiscard]] std::vector<ZoneField> zone_fields(const FarField& field);

}  // namespace glint
