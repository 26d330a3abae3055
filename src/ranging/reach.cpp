// Reach: how far and how precisely each pixel ranges a flat target that fills it and faces the module.
#include <glint/core/samples.h>
#include <glint/optics/receiver.h>
#include <glint/ranging/link.h>
#include <glint/ranging/poisson.h>
#include <glint/ranging/reach.h>

#include <algorithm>
#include <cmath>

namespace glint {
namespace {

PixelLight light_of(const Link& link, int column, int row, std::vector<double>& dwell_intensity,
                    std::vector<int>& lit) {
    const Receiver& receiver = link.design.receiver;
    const int rays = link.design.sampling.rays_per_pixel;
    const std::uint64_t pixel = static_cast<std::uint64_t>(row) * receiver.pixels.columns + column;
    const Vec2 shift = shift_of(link.design.sampling.seed, pixel);
    PixelLight light;
    lit.clear();
    for (int i = 0; i < rays; ++i) {
        const PixelRay ray = pixel_ray(receiver, column, row, r2_point(i, shift));
        light.collected += ray.solid_angle * ray.cosine * link.pupil / rays;
        beams_near(link.field, ray.direction, link.field.reach, [&](const Beam& beam) {
            const double given = intensity(beam, ray.direction) / rays;
            if (given <= 0) return;
            double& sum = dwell_intensity[link.dwell_of_zone[beam.zone]];
            if (sum == 0) lit.push_back(link.dwell_of_zone[beam.zone]);
            sum += given;
        });
    }
    for (const int dwell : lit) {
        if (dwell_intensity[dwell] > light.intensity)
            light.intensity = dwell_intensity[dwell], light.dwell = dwell;
        dwell_intensity[dwell] = 0;
    }
    return light;
}

double target_background(const Link& link, const PixelLight& light, double reflectance) {
    return background_rate(link.model, extended_energy(link.ambient, lambertian(reflectance, 1),
                                                       light.collected, 1, link.transmission));
}

double target_signal(const Link& link, const PixelLight& light, const FlatTarget& target) {
    const double exposure = light.intensity * link.model.pulse_width / (target.distance * target.distance);
    const double way = link.transmission * std::exp(-2 * link.extinction * target.distance);
    return extended_energy(exposure, lambertian(target.reflectance, 1), light.collected, 1, way) *
           link.model.counts_per_joule;
}

}  // namespace

std::vector<PixelLight> pixel_lights(const Link& link, const Progress& progress) {
    const Pixels& pixels = link.design.receiver.pixels;
    std::vector<PixelLight> lights(static_cast<std::size_t>(pixels.rows) * pixels.columns);
    parallel_for(static_cast<std::size_t>(pixels.rows), "lighting pixels", progress, [&](std::size_t row) {
        std::vector<double> dwell_intensity(static_cast<std::size_t>(link.plan.dwells()), 0.0);
        std::vector<int> lit;
        for (int column = 0; column < pixels.columns && !progress.stopping(); ++column)
            lights[row * pixels.columns + column] =
                light_of(link, column, static_cast<int>(row), dwell_intensity, lit);
    });
    return lights;
}

Detection detect_target(const Link& link, const PixelLight& light, const FlatTarget& target) {
    return detect(link.model, target_signal(link, light, target),
                  target_background(link, light, target.reflectance));
}

const char* name_of(RangeLimit limit) {
    switch (limit) {
        case RangeLimit::no_light:
            return "no light";
        case RangeLimit::signal:
            return "signal";
        case RangeLimit::background:
            return "background light";
        case RangeLimit::gate:
            return "gate";
    }
    return "";
}

PixelReach reach(const Link& link, const PixelLight& light, double reflectance, double probability) {
    if (light.intensity <= 0) return {};
    const double gate = link.design.receiver.photon_counting.gate;
    const double rate = target_background(link, light, reflectance);
    const double background = window_background(link.model, rate);
    const int threshold = poisson_threshold(background, link.model.false_alarm);
    const double needed = required_signal(threshold, background, probability);  // counts inside the window
    const auto enough = [&](double distance) {
        const double shot = target_signal(link, light, {reflectance, distance});
        return link.model.captured * echo_counts(link.model, shot, rate) >= needed;
    };
    if (enough(gate)) return {gate, RangeLimit::gate};
    double low = gate * 1e-6, high = gate;
    const RangeLimit limit = background > needed ? RangeLimit::background : RangeLimit::signal;
    if (!enough(low)) return {0, limit};
    while (high - low > 1e-6 * high) {
        const double middle = (low + high) / 2;
        (enough(middle) ? low : high) = middle;
    }
    return {low, limit};
}

double reached_by_share(std::vector<double> values, double share) {
    if (values.empty()) return 0;
    const auto needed =
        static_cast<std::size_t>(std::ceil(share * static_cast<double>(values.size()) - 1e-9));
    const std::size_t index = values.size() - std::clamp<std::size_t>(needed, 1, values.size());
    std::ranges::nth_element(values, values.begin() + static_cast<std::ptrdiff_t>(index));
    return values[index];
}

}  // namespace glint
