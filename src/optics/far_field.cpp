// The far field: beams indexed over direction.
//
// The index is a square raster over (y, z) of the unit direction: two directions an angle apart are never
// farther apart than that angle in (y, z), so a beam that reaches a direction is found within its angular
// reach.
#include <glint/optics/far_field.h>

#include <algorithm>
#include <cmath>

namespace glint {
namespace {

// Same but for the origin, the zone and the power.
bool same_pattern(const Beam& a, const Beam& b) {
    const Kernel &k = a.kernel, &l = b.kernel;
    return a.axis == b.axis && a.right == b.right && k.shape == l.shape && k.a == l.a && k.b == l.b &&
           k.edge == l.edge && k.exponent == l.exponent;
}

// Beams arrive zone by zone or emitter by emitter; equal patterns of a zone share the first one met.
std::vector<Beam> merged(const std::vector<Beam>& beams, int zones) {
    std::vector<Beam> result;
    std::vector<std::vector<int>> of_zone(static_cast<std::size_t>(zones));
    for (const Beam& beam : beams) {
        if (beam.power <= 0) continue;
        auto& known = of_zone[beam.zone];
        // Only wide fields share axes; a lens gives every emitter its own. So a few comparisons are enough.
        const auto same = known.empty() || !same_pattern(result[known.front()], beam) ? -1 : known.front();
        if (same < 0) {
            known.push_back(static_cast<int>(result.size()));
            result.push_back(beam);
            continue;
        }
        Beam& into = result[same];
        const double power = into.power + beam.power;
        into.origin = (into.origin * into.power + beam.origin * beam.power) / power;
        into.power = power;
    }
    return result;
}

double angular_reach(const Kernel& kernel) { return std::atan(kernel.reach); }

int cell_of(double coordinate, int cells) {
    return std::clamp(static_cast<int>((coordinate + 1) / 2 * cells), 0, cells - 1);
}

}  // namespace

FarField far_field(const Beams& beams, Merge merge) {
    FarField field{.beams = merge == Merge::yes ? merged(beams.beams, beams.zones) : beams.beams,
                   .zones = beams.zones};
    for (const Beam& beam : field.beams) {
        field.reach = std::max(field.reach, angular_reach(beam.kernel));
        field.spread = std::max(field.spread, beam.origin.norm());
        field.widest_exit = std::max(field.widest_exit, beam.exit_radius);
    }
    field.alike = std::ranges::all_of(field.beams, [&](const Beam& beam) {
        const Beam& first = field.beams.front();
        return same_pattern(first, beam) && beam.exit_radius == first.exit_radius &&
               beam.curvature == first.curvature && beam.origin.x() == first.origin.x();
    });
    field.reach = std::min(field.reach, 2.0);  // no two points of the raster are farther apart along an axis
    field.cells = std::clamp(static_cast<int>(2 / std::max(field.reach, 1e-9)), 1, 1024);
    const auto cell = [&](const Beam& beam) {
        return static_cast<std::size_t>(cell_of(beam.axis.y(), field.cells)) * field.cells +
               cell_of(beam.axis.z(), field.cells);
    };
    std::ranges::stable_sort(field.beams, {}, cell);
    field.cell_first.assign(static_cast<std::size_t>(field.cells) * field.cells + 1, 0);
    for (const Beam& beam : field.beams) ++field.cell_first[cell(beam) + 1];
    for (std::size_t c = 1; c < field.cell_first.size(); ++c) field.cell_first[c] += field.cell_first[c - 1];
    return field;
}

double zone_intensity(const FarField& field, int zone, const Vec3& direction) {
    double sum = 0;
    beams_near(field, direction, field.reach, [&](const Beam& beam) {
        if (beam.zone == zone) sum += intensity(beam, direction);
    });
    return sum;
}

std::vector<ZoneField> zone_fields(const FarField& field) {
    std::vector<ZoneField> zones(static_cast<std::size_t>(field.zones));
    for (ZoneField& zone : zones) zone.direction = Vec3::Zero();
    for (const Beam& beam : field.beams) {
        zones[beam.zone].power += beam.power;
        zones[beam.zone].direction += beam.power * beam.axis;
    }
    constexpr int steps = 7;  // each side of the axis
    for (const Beam& beam : field.beams) {
        const Vec3 up = beam.right.cross(beam.axis);
        const bool wide = beam.kernel.shape != KernelShape::gaussian;
        const double reach_p =
            wide ? std::min(beam.kernel.reach, beam.kernel.a + beam.kernel.b) : beam.kernel.a;
        const double reach_q = wide ? reach_p : beam.kernel.b;
        for (int i = -steps; i <= steps; ++i)
            for (int j = -steps; j <= steps; ++j) {
                const Vec3 direction =
                    (beam.axis + reach_p * i / steps * beam.right + reach_q * j / steps * up).normalized();
                zones[beam.zone].peak =
                    std::max(zones[beam.zone].peak, zone_intensity(field, beam.zone, direction));
            }
    }
    for (ZoneField& zone : zones) {
        if (zone.peak > 0) zone.solid_angle = zone.power / zone.peak;
        if (zone.direction.norm() > 0) zone.direction.normalize();
    }
    return zones;
}

}  // namespace glint
