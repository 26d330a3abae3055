// Returns: what every pixel gets back from the scene in every dwell that lights it.
#include <glint/core/samples.h>
#include <glint/optics/receiver.h>
#include <glint/ranging/air.h>
#include <glint/ranging/link.h>
#include <glint/ranging/returns.h>
#include <glint/ranging/spectrum.h>

#include <algorithm>
#include <cmath>

namespace glint {
namespace {

// One zone's light from one ray's patch of surface.
struct Glimpse {
    int dwell;
    int zone;
    int object;
    double range;
    double energy;  // on the pixel per shot [J]
    Vec3 point;
};

// Work space of one row of pixels; lives as long as the row, so the pixels of a row allocate nothing anew.
struct Scratch {
    std::vector<double> zone_irradiance;  // [zones], zero between points
    std::vector<int> lit_zones;
    std::vector<Glimpse> glimpses;
};

struct Row {
    std::vector<Return> returns;
    std::size_t hits = 0;
    std::size_t seeing = 0;
};

// Adds what one hit sends back from every zone that lights it.
void add_glimpses(const Link& link, const Scene& scene, const Hit& hit, const PixelRay& ray, double share,
                  Scratch& scratch) {
    const Vec3 point = link.pose.to_module(hit.point);
    double strongest = 0;
    Vec3 source = Vec3::Zero();
    scratch.lit_zones.clear();
    light_at(link.field, point, [&](const Beam& beam, double irradiance) {
        double& sum = scratch.zone_irradiance[beam.zone];
        if (sum == 0) scratch.lit_zones.push_back(beam.zone);
        sum += irradiance;
        if (irradiance > strongest) strongest = irradiance, source = beam.origin;
    });
    if (scratch.lit_zones.empty()) return;
    const Vec3 emitter = link.pose.to_scene(source);
    const Vec3 start = off_surface(hit), path = emitter - start;
    const double out = path.norm(), cosine = path.dot(hit.normal) / out;
    const bool lit = cosine > 0 && !occluded(scene, {.origin = start, .direction = path / out, .far = out});
    const double rho = reflectance(scene.materials[hit.material], link.design.emitters.wavelength);
    const double way = std::exp(-link.extinction * (out + hit.distance)) * link.transmission;
    for (const int zone : scratch.lit_zones) {
        const double exposure = scratch.zone_irradiance[zone] * cosine * link.model.pulse_width;
        scratch.zone_irradiance[zone] = 0;
        if (!lit) continue;
        const double energy = extended_energy(exposure, lambertian(rho, 1),
                                              ray.solid_angle * share * ray.cosine, link.pupil, way);
        if (energy > 0)
            scratch.glimpses.push_back(
                {link.dwell_of_zone[zone], zone, hit.object, (out + hit.distance) / 2, energy, hit.point});
    }
}

// The glimpses of one dwell, sorted by range, whose ranges fit into one window and bring most energy.
std::span<const Glimpse> strongest_echo(std::span<const Glimpse> dwell, double window) {
    std::size_t first = 0, best_first = 0, best_last = 0;
    double sum = 0, best = -1;
    for (std::size_t last = 0; last < dwell.size(); ++last) {
        sum += dwell[last].energy;
        while (dwell[last].range - dwell[first].range > window) sum -= dwell[first++].energy;
        if (sum > best) best = sum, best_first = first, best_last = last;
    }
    return dwell.subspan(best_first, best_last - best_first + 1);
}

// Key with the largest energy; the first met on a tie.
int dominant(std::span<const Glimpse> echo, int Glimpse::*key) {
    double best = -1;
    int result = 0;
    for (const Glimpse& candidate : echo) {
        double sum = 0;
        for (const Glimpse& other : echo)
            if (other.*key == candidate.*key) sum += other.energy;
        if (sum > best) best = sum, result = candidate.*key;
    }
    return result;
}

void form_returns(const Link& link, int column, int row, double rate, Scratch& scratch, Row& out) {
    auto& glimpses = scratch.glimpses;
    std::ranges::stable_sort(glimpses, [](const Glimpse& a, const Glimpse& b) {
        return a.dwell != b.dwell ? a.dwell < b.dwell : a.range < b.range;
    });
    const double window = link.model.window * link.model.range_per_time;
    for (std::size_t first = 0; first < glimpses.size();) {
        std::size_t last = first;
        while (last < glimpses.size() && glimpses[last].dwell == glimpses[first].dwell) ++last;
        const auto echo = strongest_echo(std::span(glimpses).subspan(first, last - first), window);
        Return entry{.column = column, .row = row, .dwell = glimpses[first].dwell, .point = Vec3::Zero()};
        for (const Glimpse& glimpse : echo) {
            entry.energy += glimpse.energy;
            entry.range += glimpse.energy * glimpse.range;
            entry.point += glimpse.energy * glimpse.point;
        }
        entry.range /= entry.energy;
        entry.point /= entry.energy;
        entry.zone = dominant(echo, &Glimpse::zone);
        entry.object = dominant(echo, &Glimpse::object);
        entry.detection = detect(link.model, entry.energy * link.model.counts_per_joule, rate);
        out.returns.push_back(entry);
        first = last;
    }
}

Row cast_row(const Link& link, const Scene& scene, int row, const Progress& progress) {
    const Receiver& receiver = link.design.receiver;
    const int rays = link.design.sampling.rays_per_pixel;
    const Vec3 origin = link.pose.to_scene(receiver_position(receiver));
    Scratch scratch{.zone_irradiance = std::vector<double>(static_cast<std::size_t>(link.field.zones), 0.0)};
    Row out;
    for (int column = 0; column < receiver.pixels.columns; ++column) {
        if (progress.stopping()) throw Stopped{};
        const std::uint64_t pixel = static_cast<std::uint64_t>(row) * receiver.pixels.columns + column;
        const Vec2 shift = shift_of(link.design.sampling.seed, pixel);
        scratch.glimpses.clear();
        double ambient_power = 0;
        bool seeing = false;
        for (int i = 0; i < rays; ++i) {
            const PixelRay ray = pixel_ray(receiver, column, row, r2_point(i, shift));
            const Vec3 direction = link.pose.rotation * ray.direction;
            const auto hit = closest_hit(scene, {.origin = origin, .direction = direction});
            if (!hit) continue;
            const double rho = reflectance(scene.materials[hit->material], link.design.emitters.wavelength);
            ambient_power +=
                extended_energy(link.ambient, lambertian(rho, 1), ray.solid_angle / rays * ray.cosine,
                                link.pupil, link.transmission);
            if (hit->distance > link.design.receiver.photon_counting.gate) continue;
            ++out.hits;
            seeing = true;
            add_glimpses(link, scene, *hit, ray, 1.0 / rays, scratch);
        }
        out.seeing += seeing;
        form_returns(link, column, row, background_rate(link.model, ambient_power), scratch, out);
    }
    return out;
}

}  // namespace

Link make_link(const Design& design, const FiringPlan& plan, const FarField& field) {
    Link link{.design = design,
              .plan = plan,
              .field = field,
              .dwell_of_zone = std::vector<int>(static_cast<std::size_t>(field.zones), 0),
              .model = counting_model(design),
              .pose = module_pose(design.placement)};
    for (int dwell = 0; dwell < plan.dwells(); ++dwell)
        for (const int zone : plan.zones_of(dwell)) link.dwell_of_zone[zone] = dwell;
    link.ambient = ambient_band_irradiance(design.environment, design.receiver.filter);
    link.pupil = pupil_area(design.receiver.lens);
    link.transmission = design.receiver.lens.transmission * design.receiver.filter.transmission;
    if (design.environment.visibility)
        link.extinction = extinction(*design.environment.visibility, design.emitters.wavelength);
    return link;
}

Returns cast_returns(const Link& link, const Scene& scene, const Progress& progress) {
    const Pixels& pixels = link.design.receiver.pixels;
    std::vector<Row> rows(static_cast<std::size_t>(pixels.rows));
    parallel_for(rows.size(), "casting pixels", progress, [&](std::size_t row) {
        rows[row] = cast_row(link, scene, static_cast<int>(row), progress);
    });
    Returns returns{.rays = static_cast<std::size_t>(pixels.rows) * pixels.columns *
                            link.design.sampling.rays_per_pixel};
    for (const Row& row : rows) {
        returns.list.insert(returns.list.end(), row.returns.begin(), row.returns.end());
        returns.rays_hit += row.hits;
        returns.pixels_seeing += row.seeing;
    }
    return returns;
}

}  // namespace glint
