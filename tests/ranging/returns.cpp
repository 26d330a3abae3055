// Returns from known surfaces, and forward against backward casting.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/emitter/array.h>
#include <glint/optics/receiver.h>
#include <glint/ranging/landing.h>
#include <glint/ranging/link.h>
#include <glint/ranging/reach.h>
#include <glint/ranging/returns.h>

#include <doctest/doctest.h>
#include <omp.h>
#include <cmath>
#include <numeric>

using namespace glint;

namespace {

Design flood_design() {
    Design design;
    design.emitters.wavelength = 940e-9;
    design.emitters.aperture = 10e-6;
    design.emitters.layout = {.kind = LayoutKind::grid, .rows = 4, .columns = 4, .pitch = 40e-6};
    design.emitters.addressing = {.scheme = AddressingScheme::blocks, .rows = 1, .columns = 1};
    design.emitters.lobe = {.divergence = radians(4)};
    design.drive = {.peak_power = 0.5, .pulse_width = 2e-9};
    design.firing = {.shots = 100, .repetition = 1e6};
    design.optics.elements = {
        Diffuser{.horizontal = radians(60), .vertical = radians(45), .roll_off = radians(2), .exponent = 0}};
    design.receiver.lens = {.focal_length = 4e-3, .f_number = 1.4, .transmission = 0.8};
    design.receiver.pixels = {.columns = 32, .rows = 24, .pitch = 60e-6, .fill_factor = 0.7};
    design.receiver.filter = {.center = 940e-9, .width = 20e-9, .transmission = 0.9};
    design.receiver.photon_counting = {.efficiency = 0.2, .bin = 250e-12, .gate = 60, .false_alarm = 0.01};
    design.environment = {.source = AmbientSource::sun, .illuminance = 50e3};
    design.sampling.rays_per_pixel = 16;
    return design;
}

// All stages from the design to the link.
struct Bench {
    Design design;
    EmitterArray array;
    FiringPlan plan;
    Beams beams;
    FarField field;
    Link link;
    explicit Bench(Design d)
        : design(std::move(d)),
          array(build_array(design.emitters, field_sense(design.optics), "")),
          plan(plan_firing(design, array)),
          beams(project(array, design)),
          field(far_field(beams)),
          link(make_link(design, plan, field)) {}
};

Scene wall_at(double distance, double rho, double turn = 0) {
    SceneParts parts;
    parts.materials = {{"wall", {{940e-9, rho}}}};
    parts.objects = {{"wall", 0}};
    parts.planes = {{{.point = Vec3(distance, 0, 0), .normal = Vec3(-std::cos(turn), std::sin(turn), 0)}, 0}};
    return build_scene(std::move(parts));
}

}  // namespace

TEST_CASE("a flat Lambertian wall gives the closed-form return at three distances") {
    // Closed form for a pixel at angle theta, uniform intensity I (n = 0): E = I cos^3 / z^2; energy = E tp
    // rho/pi * Omega * A cos * tau with Omega = p^2 cos^3 / f^2. Derived; textbook cos^7 fall-off in all.
    // Tolerance 0.5 %: the pixel's own extent (curvature of cos^7 over 0.9 deg) and the offset of emitter and
    // receiver, here zero.
    const Bench bench(flood_design());
    const double intensity_on_axis = zone_intensity(bench.field, 0, Vec3::UnitX());
    for (const double distance : {0.8, 5.0, 30.0}) {
        const Returns returns = cast_returns(bench.link, wall_at(distance, 0.4));
        REQUIRE(returns.list.size() == 32 * 24);
        for (const Return& entry : returns.list) {
            const PixelRay ray = pixel_ray(bench.design.receiver, entry.column, entry.row, {0.5, 0.5});
            const double cosine = ray.cosine;
            const double exposure = intensity_on_axis * std::pow(cosine, 3) / (distance * distance) * 2e-9;
            const double expected = exposure * 0.4 / pi * ray.solid_angle * cosine *
                                    pupil_area(bench.design.receiver.lens) * 0.8 * 0.9;
            if (std::acos(cosine) > radians(20)) continue;  // beyond, the edge of the field begins
            CHECK(entry.energy == about(expected).epsilon(0.005));
            CHECK(entry.range == about(distance / cosine).epsilon(0.005));
        }
    }
}

TEST_CASE("background is that of the sunlit wall, whatever the distance") {
    const Bench bench(flood_design());
    const Returns near = cast_returns(bench.link, wall_at(1, 0.4)),
                  far = cast_returns(bench.link, wall_at(20, 0.4));
    for (std::size_t i = 0; i < near.list.size(); ++i) {
        const PixelRay ray =
            pixel_ray(bench.design.receiver, near.list[i].column, near.list[i].row, {0.5, 0.5});
        const double power =
            bench.link.ambient * 0.4 / pi * ray.solid_angle * ray.cosine * bench.link.pupil * 0.72;
        CHECK(near.list[i].detection.background_rate ==
              about(power * bench.link.model.counts_per_joule).epsilon(0.005));
        CHECK(near.list[i].detection.background_rate ==
              about(far.list[i].detection.background_rate).epsilon(1e-9));
    }
}

TEST_CASE("casting beams forward and pixels backward agree on the energy that reaches a wall") {
    Design design = flood_design();
    SUBCASE("diffuser") {}
    SUBCASE("lens out of focus") {
        design.emitters.layout = {.kind = LayoutKind::grid, .rows = 24, .columns = 32, .pitch = 40e-6};
        design.emitters.lobe.divergence = radians(20);
        design.optics.elements = {Lens{.focal_length = 3e-3, .clear_aperture = 4e-3, .defocus = 120e-6}};
    }
    design.sampling.rays_per_pixel = 64;
    // The receiver's field covers all of the light.
    design.receiver.pixels = {.columns = 120, .rows = 100, .pitch = 60e-6};
    const Bench bench(design);
    const Scene scene = wall_at(3, 0.4);
    const ZoneLanding forward = land_zones(bench.field, bench.link.pose, scene, 4096, 1)[0];
    CHECK(forward.landed + forward.escaped ==
          about(std::accumulate(bench.beams.beams.begin(), bench.beams.beams.end(), 0.0,
                                [](double s, const Beam& b) { return s + b.power; }))
              .epsilon(1e-9));
    // Backward: each pixel's energy over its share of the wall, undone: E dA = energy pi / (rho A cos tau) *
    // R^2 / cos.
    double landed = 0;
    for (const Return& entry : cast_returns(bench.link, scene).list) {
        const PixelRay ray = pixel_ray(design.receiver, entry.column, entry.row, {0.5, 0.5});
        const double exposure = entry.energy / (0.4 / pi * ray.solid_angle * ray.cosine * bench.link.pupil *
                                                bench.link.transmission);
        landed +=
            exposure / design.drive.pulse_width * ray.solid_angle * std::pow(entry.range, 2) / ray.cosine;
    }
    CHECK(landed == about(forward.landed).epsilon(0.01));
}

TEST_CASE("a tilted wall returns less by the cosine of the light's incidence") {
    const Bench bench(flood_design());
    const auto middle = [&](double turn) {
        const Returns returns = cast_returns(bench.link, wall_at(10, 0.4, turn));
        for (const Return& entry : returns.list)
            if (entry.column == 16 && entry.row == 12) return entry;
        return Return{};
    };
    CHECK(middle(radians(50)).energy / middle(0).energy ==
          about(std::cos(radians(50))).epsilon(0.03));  // range differs over the pixel
}

TEST_CASE("an object between emitter and surface casts a shadow that the receiver sees") {
    Design design = flood_design();
    design.receiver.right = 0.3;  // far beside the emitter
    const Bench bench(design);
    SceneParts parts;
    parts.materials = {{"all", {{940e-9, 0.5}}}};
    parts.objects = {{"wall", 0}, {"post", 0}};
    parts.planes = {{{.point = Vec3(4, 0, 0), .normal = Vec3(-1, 0, 0)}, 0}};
    parts.boxes = {
        {{.centre = Vec3(2, 0, 0), .half_size = Vec3(0.02, 0.1, 2), .rotation = Mat3::Identity()}, 1}};
    const Returns returns = cast_returns(bench.link, build_scene(std::move(parts)));
    int on_wall = 0, in_shadow = 0;
    for (const Return& entry : returns.list)
        if (entry.object == 0) {
            ++on_wall;
            // The shadow on the wall spans y = +-0.2 (similar triangles through the emitter at the origin).
            in_shadow += std::abs(entry.point.y()) < 0.12;
        }
    CHECK(on_wall > 300);
    CHECK(in_shadow == 0);
}

TEST_CASE("the pixel's echo is the nearer or farther surface, never a mix") {
    const Bench bench(flood_design());
    SceneParts parts;
    parts.materials = {{"all", {{940e-9, 0.5}}}};
    parts.objects = {{"near", 0}, {"far", 0}};
    parts.planes = {{{.point = Vec3(8, 0, 0), .normal = Vec3(-1, 0, 0)}, 1}};
    parts.boxes = {
        {{.centre = Vec3(4, 5, 0), .half_size = Vec3(0.01, 5, 10), .rotation = Mat3::Identity()}, 0}};
    for (const Return& entry : cast_returns(bench.link, build_scene(std::move(parts))).list) {
        const double near =
            entry.range * pixel_ray(bench.design.receiver, entry.column, entry.row, {0.5, 0.5}).cosine;
        CHECK((near < 4.2 || near > 7.8));
    }
}

TEST_CASE("reach ends where the target is just detected, and falls with reflectance") {
    const Bench bench(flood_design());
    const std::vector<PixelLight> lights = pixel_lights(bench.link);
    REQUIRE(lights.size() == 32 * 24);
    for (std::size_t i = 0; i < lights.size(); i += 37) {
        const PixelReach dark = reach(bench.link, lights[i], 0.1, 0.9),
                         bright = reach(bench.link, lights[i], 0.8, 0.9);
        CHECK(dark.distance <= bright.distance);
        if (dark.limit == RangeLimit::gate || dark.distance == 0) continue;
        CHECK(detect_target(bench.link, lights[i], {0.1, dark.distance * 0.999}).probability >= 0.9);
        CHECK(detect_target(bench.link, lights[i], {0.1, dark.distance * 1.001}).probability < 0.9);
    }
}

TEST_CASE("a wall of the target's reflectance is detected as far as the reach says") {
    Design design = flood_design();
    design.sampling.rays_per_pixel = 64;
    const Bench bench(design);
    const std::vector<PixelLight> lights = pixel_lights(bench.link);
    const std::size_t middle = 12 * 32 + 16;
    const PixelReach limit = reach(bench.link, lights[middle], 0.3, 0.9);
    REQUIRE(limit.limit != RangeLimit::gate);
    const auto probability_at = [&](double distance) {
        for (const Return& entry : cast_returns(bench.link, wall_at(distance, 0.3)).list)
            if (entry.column == 16 && entry.row == 12) return entry.detection.probability;
        return 0.0;
    };
    CHECK(probability_at(limit.distance * 0.99) > 0.9);
    CHECK(probability_at(limit.distance * 1.01) < 0.9);
}

TEST_CASE("fog shortens the way by exp(-2 sigma R)") {
    Design design = flood_design();
    const Bench clear(design);
    design.environment.visibility = 200;
    const Bench fog(design);
    const Returns with = cast_returns(fog.link, wall_at(30, 0.4)),
                  without = cast_returns(clear.link, wall_at(30, 0.4));
    REQUIRE(with.list.size() == without.list.size());
    for (std::size_t i = 0; i < with.list.size(); ++i)
        // 19.56 per km below 500 m of visibility (Kim 2001), by 0.2 km; the way differs a little over a
        // pixel.
        CHECK(with.list[i].energy / without.list[i].energy ==
              about(std::exp(-2 * 0.01956 * without.list[i].range)).epsilon(0.01));
}

TEST_CASE("returns are the same for any number of threads") {
    const Bench bench(flood_design());
    const int before = omp_get_max_threads();
    omp_set_num_threads(1);
    const Returns one = cast_returns(bench.link, wall_at(5, 0.4));
    omp_set_num_threads(3);
    const Returns three = cast_returns(bench.link, wall_at(5, 0.4));
    omp_set_num_threads(before);
    REQUIRE(one.list.size() == three.list.size());
    for (std::size_t i = 0; i < one.list.size(); ++i) {
        CHECK(one.list[i].energy == three.list[i].energy);
        CHECK(one.list[i].range == three.list[i].range);
    }
}

TEST_CASE("a share of a list") {
    CHECK(reached_by_share({1, 2, 3, 4, 5}, 0.8) == 2);
    CHECK(reached_by_share({5, 4, 3, 2, 1}, 1) == 1);
    CHECK(reached_by_share({1, 2, 3, 4, 5}, 0.01) == 5);
    CHECK(reached_by_share({}, 0.5) == 0);
}
