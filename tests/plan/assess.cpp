// The assessment as a whole: requirements against what was got, and what must hold between its parts.
#include "about.h"

#include <glint/core/error.h>
#include <glint/core/files.h>
#include <glint/plan/assess.h>

#include <fmt/format.h>
#include <unistd.h>
#include <algorithm>
#include <cmath>
#include <filesystem>

using namespace glint;
namespace fs = std::filesystem;

namespace {

// A small module in front of a wall, in a folder of this test's own.
struct Module {
    fs::path folder = fs::temp_directory_path() / fmt::format("glint-plan-{}", ::getpid());
    LoadedDesign loaded;

    Module() {
        write_file(folder / "scene.xml", R"(<scene><material name="m" reflectance="50 %"/>
            <object name="wall" material="m"><plane x="3 m" normal_x="-1" normal_z="0"/></object></scene>)");
        Design& design = loaded.design;
        design.emitters = {.wavelength = 940e-9, .aperture = 10e-6};
        design.emitters.layout = {.kind = LayoutKind::grid, .rows = 12, .columns = 16, .pitch = 40e-6};
        design.emitters.addressing = {.scheme = AddressingScheme::blocks, .rows = 3, .columns = 4};
        design.emitters.lobe.divergence = 0.35;
        design.drive = {.peak_power = 0.05, .pulse_width = 3e-9};
        design.firing = {.shots = 60, .repetition = 1e6};
        design.optics.elements = {Lens{.focal_length = 1.2e-3, .clear_aperture = 2.5e-3, .defocus = 100e-6}};
        design.receiver.lens = {.focal_length = 2e-3, .f_number = 1.2};
        design.receiver.pixels = {.columns = 32, .rows = 24, .pitch = 25e-6};
        design.receiver.filter = {.center = 940e-9, .width = 20e-9};
        design.receiver.photon_counting = {
            .efficiency = 0.2, .bin = 250e-12, .gate = 30, .false_alarm = 0.01};
        design.environment = {.source = AmbientSource::sun, .illuminance = 20e3};
        design.placement.scene = "scene.xml";
        loaded.folder = folder;
    }
    ~Module() { fs::remove_all(folder); }

    [[nodiscard]] Assessment assessed() const { return assess(loaded); }
};

}  // namespace

TEST_CASE("every point is on the wall, and belongs to a zone and a pixel that exist") {
    const Assessment result = Module().assessed();
    CHECK(result.points.size() > 500);
    for (const Point& point : result.points) {
        CHECK(point.position.x() == about(3).epsilon(1e-9));
        CHECK((point.zone >= 0 && point.zone < 12));
        CHECK((point.column >= 0 && point.column < 32 && point.row >= 0 && point.row < 24));
        CHECK(point.probability >= 0.5);
        CHECK((point.precision > 0 && std::isfinite(point.precision)));
    }
    CHECK(result.points_on_object == std::vector<std::size_t>{result.points.size()});
}

TEST_CASE("zones add up: points, power, and landed light") {
    const Assessment result = Module().assessed();
    std::size_t points = 0;
    double in_beams = 0, landed = 0;
    for (const ZoneReport& zone : result.zones) {
        points += zone.points;
        in_beams += zone.field.power;
        landed += zone.landing.landed + zone.landing.escaped;
        CHECK(zone.emitters == 16);
        CHECK(zone.landing.peak_irradiance <= zone.field.peak / 9 * 1.001);  // no nearer than 3 m
    }
    double lost = 0;
    for (const Loss& loss : result.beams.losses) lost += loss.power;
    CHECK(points == result.points.size());
    CHECK(in_beams + lost == about(result.beams.emitted).epsilon(1e-12));
    CHECK(landed == about(in_beams).epsilon(1e-9));
}

TEST_CASE("the zone that lights a pixel is the one whose part of the field it is in") {
    const Assessment result = Module().assessed();
    // 4 x 3 zones over the field, numbered like the picture: upper left first.
    for (const Point& point : result.points) {
        const Vec3& direction = result.zones[point.zone].field.direction;
        const Vec3 seen = point.position.normalized();
        CHECK((direction - seen).norm() < 0.17);  // half a zone's diagonal and a little
    }
    CHECK(result.zones[0].field.direction.y() > 0);
    CHECK(result.zones[0].field.direction.z() > 0);
    CHECK(result.zones[11].field.direction.y() < 0);
}

// The small module with diodes that heat up.
Module driven_by_current() {
    Module module;
    Emitters& emitters = module.loaded.design.emitters;
    emitters.heat.package_resistance = 0, emitters.heat.substrate_thickness = 100e-6;
    module.loaded.design.drive.by = DriveBy::current;
    module.loaded.design.drive.current = 20e-3;
    return module;
}

TEST_CASE("eye safety counts with the brightest moment of the diodes") {
    Module module = driven_by_current();
    const Assessment driven = module.assessed();
    REQUIRE(driven.chip);
    // At the sink's temperature all are equally bright.
    module.loaded.design.drive.by = DriveBy::data_sheet;
    module.loaded.design.drive.peak_power = driven.chip->state.emitters.front().brightest;
    CHECK(driven.safety.worst_ratio == about(module.assessed().safety.worst_ratio).epsilon(1e-9));
    CHECK(driven.chip->state.emitters.front().brightest > 1.001 * mean_power(driven.chip->state));
}

TEST_CASE("zones that drift out of the filter send nothing back, and a finding says so") {
    Module module = driven_by_current();
    // On nearly all the time, so that the middle of the chip is hotter than its corners.
    module.loaded.design.drive.pulse_width = 300e-9;
    const Assessment whole = module.assessed();
    const std::vector<double>& wavelength = whole.chip->zone_wavelength;
    const auto [shortest, longest] = std::ranges::minmax(wavelength);
    REQUIRE(longest - shortest > 1e-12);
    // A band that ends between them.
    const double end = (shortest + longest) / 2;
    Filter& filter = module.loaded.design.receiver.filter;
    filter.width = 2 * (end - 935e-9) / 2, filter.center = 935e-9 + filter.width / 2;
    const Assessment cut = module.assessed();
    const auto told = [](const Assessment& assessment) {
        return std::ranges::any_of(assessment.findings, [](const std::string& finding) {
            return finding.find("drifted out of the filter") != std::string::npos;
        });
    };
    CHECK(!told(whole));
    CHECK(told(cut));
    for (std::size_t zone = 0; zone < wavelength.size(); ++zone) {
        CAPTURE(zone);
        CHECK((cut.zones[zone].returns == 0) == (wavelength[zone] > end));
        CHECK(cut.zones[zone].landing.landed == about(whole.zones[zone].landing.landed).epsilon(1e-12));
    }
    // All of them out: told why nothing is seen.
    filter.width = 4e-9, filter.center = 938e-9;
    CHECK_THROWS_WITH_AS((void)module.assessed(), doctest::Contains("drifted out of the filter"), Error);
}

TEST_CASE("more power reaches farther and is never safer") {
    Module module;
    module.loaded.design.requirements.list = {RangeRequirement{.distance = 1, .reflectance = 0.1}};
    double range = 0, ratio = 0;
    for (const double power : {0.02, 0.05, 0.1, 0.4}) {
        module.loaded.design.drive.peak_power = power;
        const Assessment result = module.assessed();
        CHECK(result.requirements[0].got > range);
        CHECK(result.safety.worst_ratio > ratio);
        range = result.requirements[0].got;
        ratio = result.safety.worst_ratio;
    }
}

TEST_CASE("each kind of requirement is met just below and missed just above what was got") {
    Module module;
    const auto result_of = [&](Requirement requirement) {
        module.loaded.design.requirements.list = {std::move(requirement)};
        return module.assessed().requirements.at(0);
    };
    const double range = result_of(RangeRequirement{.distance = 1, .reflectance = 0.3}).got;
    CHECK(result_of(RangeRequirement{.distance = range * 0.99, .reflectance = 0.3}).met);
    CHECK(!result_of(RangeRequirement{.distance = range * 1.01, .reflectance = 0.3}).met);
    const double precision =
        result_of(PrecisionRequirement{.limit = 1, .distance = range * 0.8, .reflectance = 0.3}).got;
    CHECK(result_of(
              PrecisionRequirement{.limit = precision * 1.01, .distance = range * 0.8, .reflectance = 0.3})
              .met);
    CHECK(!result_of(
               PrecisionRequirement{.limit = precision * 0.99, .distance = range * 0.8, .reflectance = 0.3})
               .met);
    CHECK(!result_of(PrecisionRequirement{.limit = 10, .distance = range * 20, .reflectance = 0.3})
               .met);  // not detected
    const double rate = result_of(FrameRateRequirement{.minimum = 1}).got;
    CHECK(rate == about(1 / (12 * 60e-6)));
    CHECK(result_of(FrameRateRequirement{.minimum = rate}).met);
    CHECK(!result_of(FrameRateRequirement{.minimum = rate * 1.01}).met);
    const double power = result_of(AveragePowerRequirement{.maximum = 1}).got;
    CHECK(power == about(192 * 0.05 * 3e-9 * 60 / (12 * 60e-6)));
    CHECK(!result_of(AveragePowerRequirement{.maximum = power * 0.99}).met);
    const int points = static_cast<int>(result_of(PointsRequirement{.object = "wall", .minimum = 1}).got);
    CHECK(result_of(PointsRequirement{.object = "wall", .minimum = points}).met);
    CHECK(!result_of(PointsRequirement{.object = "wall", .minimum = points + 1}).met);
    const double ratio = result_of(EyeSafetyRequirement{.margin = 0}).got;
    REQUIRE(ratio < 1);
    CHECK(result_of(EyeSafetyRequirement{.margin = 1 - ratio - 1e-6}).met);
    CHECK(!result_of(EyeSafetyRequirement{.margin = 1 - ratio + 1e-6}).met);
}

TEST_CASE("a stop is heard in every stage") {
    const Module module;
    const std::atomic<bool> stop = true;
    CHECK_THROWS_AS((void)assess(module.loaded, Progress{.report = {}, .stop = &stop}), Stopped);
}
