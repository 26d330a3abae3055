// zones.csv.
#include <glint/core/constants.h>
#include <glint/report/tables.h>

#include <fmt/format.h>
#include <cmath>

namespace glint {

std::string zones_csv(const Assessment& assessment) {
    std::string text =
        "zone,emitters,horizontal_deg,vertical_deg,solid_angle_sr,shot_energy_J,peak_power_W,peak_intensity_"
        "W_per_sr,"
        "peak_irradiance_at_1_m_W_per_m2,peak_irradiance_on_scene_W_per_m2,landed_share,nearest_hit_m,"
        "farthest_hit_m,"
        "returns,points,nearest_return_m,farthest_return_m\n";
    for (std::size_t z = 0; z < assessment.zones.size(); ++z) {
        const ZoneReport& zone = assessment.zones[z];
        const Vec3& direction = zone.field.direction;
        const double horizontal = std::atan2(-direction.y(), direction.x());
        const double vertical = std::atan2(direction.z(), std::hypot(direction.x(), direction.y()));
        const double total = zone.landing.landed + zone.landing.escaped;
        text += fmt::format(
            "{},{},{:.6g},{:.6g},{:.6g},{:.6g},{:.6g},{:.6g},{:.6g},{:.6g},{:.6g},{:.6g},{:.6g},{},{},{:.6g},"
            "{:.6g}\n",
            z, zone.emitters, degrees(horizontal), degrees(vertical), zone.field.solid_angle,
            zone.shot_energy, zone.field.power, zone.field.peak,
            zone.field.peak,  // intensity over 1 m squared
            zone.landing.peak_irradiance, total > 0 ? zone.landing.landed / total : 0, zone.landing.nearest,
            zone.landing.farthest, zone.returns, zone.points, zone.nearest_return, zone.farthest_return);
    }
    return text;
}

}  // namespace glint
