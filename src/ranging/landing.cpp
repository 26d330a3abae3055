// Landing: where the light of every zone goes in the scene, found by casting its beams forward.
#include <glint/core/samples.h>
#include <glint/ranging/landing.h>

#include <algorithm>

namespace glint {
namespace {

constexpr int least_rays_a_zone = 1024;

ZoneLanding land(const FarField& field, const Pose& pose, const Scene& scene, const std::vector<int>& beams,
                 int zone, int rays, int seed) {
    ZoneLanding landing{.on_object = std::vector<double>(scene.objects.size(), 0.0)};
    for (const int b : beams) {
        const Beam& beam = field.beams[b];
        const Vec3 up = beam.right.cross(beam.axis);
        const Vec2 shift = shift_of(static_cast<std::uint64_t>(seed), static_cast<std::uint64_t>(b));
        const Vec3 origin = pose.to_scene(beam.origin);
        // Samples of a field kernel carry weights whose mean is 1 only in the long run; scale to the beam's
        // power.
        double weights = 0;
        for (int i = 0; i < rays; ++i) weights += sample(beam.kernel, r2_point(i, shift)).weight;
        for (int i = 0; i < rays; ++i) {
            const KernelSample at = sample(beam.kernel, r2_point(i, shift));
            const Vec3 direction =
                pose.rotation * (beam.axis + at.tangent.x() * beam.right + at.tangent.y() * up).normalized();
            const double power = beam.power * at.weight / weights;
            const auto hit = closest_hit(scene, {.origin = origin, .direction = direction});
            if (!hit) {
                landing.escaped += power;
                continue;
            }
            landing.landed += power;
            landing.on_object[hit->object] += power;
            landing.nearest = landing.nearest == 0 ? hit->distance : std::min(landing.nearest, hit->distance);
            landing.farthest = std::max(landing.farthest, hit->distance);
            double irradiance = 0;
            light_at(field, pose.to_module(hit->point), [&](const Beam& other, double facing) {
                if (other.zone == zone) irradiance += facing;
            });
            landing.peak_irradiance =
                std::max(landing.peak_irradiance, irradiance * -direction.dot(hit->normal));
        }
    }
    return landing;
}

}  // namespace

std::vector<ZoneLanding> land_zones(const FarField& field, const Pose& pose, const Scene& scene,
                                    int rays_per_beam, int seed, const Progress& progress) {
    std::vector<std::vector<int>> beams(static_cast<std::size_t>(field.zones));
    for (std::size_t b = 0; b < field.beams.size(); ++b)
        beams[field.beams[b].zone].push_back(static_cast<int>(b));
    std::vector<ZoneLanding> landings(beams.size());
    parallel_for(beams.size(), "casting beams", progress, [&](std::size_t zone) {
        const int count = std::max<int>(1, static_cast<int>(beams[zone].size()));
        const int rays = std::max(rays_per_beam, (least_rays_a_zone + count - 1) / count);
        landings[zone] = land(field, pose, scene, beams[zone], static_cast<int>(zone), rays, seed);
    });
    return landings;
}

}  // namespace glint
