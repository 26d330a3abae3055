// The apparent source against rays drawn from the beams themselves, and at the limits of accommodation.
#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/safety/apparent_source.h>
#include "about.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <numeric>
#include <span>
#include <string>
#include <vector>

using namespace glint;

namespace {

constexpr double pulse_width = 1e-9;     // s
constexpr double emitter_radius = 5e-6;  // m, 1/e2

Design line_of_emitters(int columns, double pitch, double divergence) {
    Design design;
    design.emitters.wavelength = 940e-9;
    design.emitters.aperture = 2 * emitter_radius;
    design.emitters.layout = {.kind = LayoutKind::grid, .rows = 1, .columns = columns, .pitch = pitch};
    design.emitters.addressing = {.scheme = AddressingScheme::individual};
    design.emitters.lobe = {.divergence = divergence};
    design.drive = {.peak_power = 1, .pulse_width = pulse_width};
    return design;
}

FarField field_of(const Design& design) {
    return far_field(project(build_array(design.emitters, field_sense(design.optics), ""), design),
                     Merge::no);
}

FarField bare(double divergence) { return field_of(line_of_emitters(1, 50e-6, divergence)); }

// One emitter on the axis, or two beside it.
FarField behind_lens(double focal_length, double defocus, double beside = 0) {
    Design design = line_of_emitters(beside > 0 ? 2 : 1, 2 * beside, radians(20));
    design.optics.elements = {
        Lens{.focal_length = focal_length, .clear_aperture = 2 * focal_length, .defocus = defocus}};
    return field_of(design);
}

// Half the side of the square that stands for a Gaussian, over its standard deviation: the side is sqrt(pi/2)
// times the 1/e2 radius, which is two standard deviations.
const double half_over_deviation = std::sqrt(pi / 2);

// A retinal image made by rays.
struct RayImage {
    Vec2 mean = Vec2::Zero();       // [rad]
    Vec2 deviation = Vec2::Zero();  // standard deviation [rad]
    double densest =
        0;  // most rays in a window a quarter as long and as wide as the spot, over what the spot holds there
};

// What rays do at an eye, which is focused at each of some vergences.
struct Rays {
    double share = 0;  // of all rays that pass the pupil
    std::vector<RayImage> images;
};

// Rays in windows of a quarter of a spot, counted in cells of a twentieth.
class Raster {
public:
    explicit Raster(const Spot& spot) : spot_(spot) {}
    void add(const Vec2& angle) {
        const Vec2 cell =
            ((angle - spot_.middle).cwiseQuotient(2 * spot_.half) * 20 + Vec2::Constant(cells / 2))
                .array()
                .floor();
        if (cell.minCoeff() >= 0 && cell.maxCoeff() < cells)
            count_[static_cast<std::size_t>(cell.x() * cells + cell.y())] += 1;
    }
    [[nodiscard]] double densest() const {
        double most = 0;
        for (int x = 0; x + window <= cells; ++x)
            for (int y = 0; y + window <= cells; ++y) {
                double inside = 0;
                for (int i = 0; i < window; ++i)
                    for (int k = 0; k < window; ++k)
                        inside += count_[static_cast<std::size_t>((x + i) * cells + y + k)];
                most = std::max(most, inside);
            }
        return most;
    }

private:
    static constexpr int cells = 80, window = 5;
    Spot spot_;
    std::vector<double> count_ = std::vector<double>(cells * cells, 0.0);
};

// A million rays start where the beam does, in the plane normal to the module's axis: place Gaussian of the
// beam's exit radius, slope that of the axis, changed by the curvature, and Gaussian with the rest of the
// kernel's width. They go straight to the disc of the pupil; behind it the focus turns a ray by its place in
// the pupil over the focal distance.
Rays draw(const Beam& beam, const EyePlace& eye, std::span<const double> vergences,
          std::span<const Spot> spots) {
    constexpr std::uint32_t count = 1'000'000;
    const double bent = beam.curvature * beam.exit_radius, narrower = std::min(beam.kernel.a, beam.kernel.b);
    const double spread = std::sqrt(std::max(0.0, narrower * narrower - bent * bent));
    const Vec2 slope(beam.axis.y() / beam.axis.x(), beam.axis.z() / beam.axis.x());
    const Vec3 sight = eye.place.normalized();
    const Vec3 across = (Vec3::UnitY() - sight.y() * sight).normalized();
    const Vec3 up = (Vec3::UnitZ() - sight.z() * sight).normalized();
    // Evenly spread numbers for what decides where a ray goes, random ones for the rest.
    const bool slope_decides = spread * eye.place.norm() > beam.exit_radius;
    RandomStream random(71);
    double passed = 0;
    std::vector<Vec2> sums(vergences.size(), Vec2::Zero()), squares = sums;
    std::vector<Raster> rasters(spots.begin(), spots.end());
    for (std::uint32_t i = 0; i < count; ++i) {
        const double first = random.uniform();
        const Vec2 even = square_to_gaussian(r2_point(i, {0.5, 0.5})),
                   other = square_to_gaussian({first, random.uniform()});
        const Vec2 place = beam.exit_radius * (slope_decides ? other : even);
        const Vec2 direction = slope + beam.curvature * place + spread * (slope_decides ? even : other);
        const Vec3 start = beam.origin + Vec3(0, place.x(), place.y()), ray(1, direction.x(), direction.y());
        const Vec3 hit = start + (eye.place - start).dot(sight) / ray.dot(sight) * ray - eye.place;
        if (hit.squaredNorm() > eye.pupil_radius * eye.pupil_radius) continue;
        passed += 1;
        const Vec2 arriving = Vec2(ray.dot(across), ray.dot(up)) / ray.dot(sight),
                   at(hit.dot(across), hit.dot(up));
        for (std::size_t v = 0; v < vergences.size(); ++v) {
            const Vec2 angle = arriving - vergences[v] * at;
            sums[v] += angle, squares[v] += angle.cwiseProduct(angle);
            rasters[v].add(angle + line_of_sight(eye));
        }
    }
    Rays rays{.share = passed / count, .images = {}};
    for (std::size_t v = 0; v < vergences.size(); ++v) {
        const Vec2 mean = sums[v] / passed;
        rays.images.push_back(
            {.mean = mean,
             .deviation = (squares[v] / passed - mean.cwiseProduct(mean)).cwiseMax(0).cwiseSqrt(),
             .densest = rasters[v].densest() / passed * 16});
    }
    return rays;
}

double energy_of(const std::vector<Spot>& spots) {
    return std::accumulate(spots.begin(), spots.end(), 0.0,
                           [](double sum, const Spot& spot) { return sum + spot.energy; });
}

}  // namespace

TEST_CASE("collection through 7 mm at 100 mm and 50 mm at 2 m, Gaussian of 20 degrees") {
    // Derived (A5): d86 = 2 * 100 mm * tan 10 deg = 35.265 mm; 1 - exp(-2 (7 / 35.265)^2) = 0.075776; 50 mm
    // at 2 m: 0.010001.
    const FarField field = bare(radians(20));
    const auto share = [&](double distance, double radius) {
        return entering_light(field, {.place = Vec3(distance, 0, 0), .pupil_radius = radius}, pulse_width)
                   .passed /
               pulse_width;
    };
    // The pupil is integrated by seven points; the digits are five.
    CHECK(share(0.1, 3.5e-3) == about(0.075776).epsilon(2e-5));
    CHECK(share(2, 25e-3) == about(0.010001).epsilon(5e-5));
}

TEST_CASE("energy, middle and width of spots against rays") {
    struct Case {
        const char* name;
        FarField field;
        std::vector<Vec3> places;
    };
    const Case cases[] = {
        {"bare, 20 deg", bare(radians(20)), {{0.1, 0, 0}}},
        {"bare, 4 deg", bare(radians(4)), {{0.1, 0, 0}, {0.1, 0.003, 0}}},
        {"collimated, as wide as the pupil", behind_lens(20e-3, 0), {{0.1, 0, 0}, {0.1, 0, 0.003}}},
        {"collimated, narrow", behind_lens(4e-3, 0), {{0.1, 0, 0}, {0.1, 0.002, 0}, {2, 0.002, 0}}},
        {"diverging", behind_lens(20e-3, -1e-3), {{0.1, 0, 0}, {0.1, 0.003, 0}, {0.3, 0, 0.002}}},
        {"converging", behind_lens(20e-3, 1e-3), {{0.1, 0, 0}, {0.1, 0.003, 0}, {0.3, 0, 0.002}}},
        {"narrow, diverging", behind_lens(4e-3, -0.05e-3), {{0.1, 0, 0}, {0.3, 0.001, 0.001}}},
        {"beside the axis", behind_lens(20e-3, 0.3e-3, 1e-3), {{0.1, 0.004, 0}, {0.1, 0.005, 0.0015}}},
    };
    constexpr std::array vergences{0.0, 3.0, 10.0};
    for (const Case& each : cases)
        for (const Vec3& place : each.places) {
            CAPTURE(std::string(each.name));
            CAPTURE(place.transpose());
            const EyePlace eye{.place = place};
            const EnteringLight light = entering_light(each.field, eye, pulse_width);
            const Beam& beam = each.field.beams.back();
            const auto entering = std::ranges::find(light.beams, beam.zone, &EnteringBeam::zone);
            REQUIRE(entering != light.beams.end());
            std::vector<Spot> spots;
            for (const double vergence : vergences) spots.push_back(spot_of(*entering, light, vergence));
            const Rays rays = draw(beam, eye, vergences, spots);
            // A million rays leave 0.1 %.
            CHECK(entering->energy / (beam.power * pulse_width) == about(rays.share).epsilon(5e-3));
            // A beam well inside the pupil is cut evenly: between 0.88 (a beam of radius 0.7 of the pupil's
            // keeps more of its deviation than two Gaussians do) and 1.124 (an even disc of radius a has the
            // deviation a/2, the spot 1.124 a/2). One that meets the rim is cut on one side, and up to a
            // quarter narrower that way.
            const bool well_inside = entering->offset.norm() < 0.6 * eye.pupil_radius;
            for (std::size_t v = 0; v < vergences.size(); ++v) {
                CAPTURE(vergences[v]);
                const RayImage& image = rays.images[v];
                const Vec2 middle = spots[v].middle - line_of_sight(eye),
                           deviation = spots[v].half / half_over_deviation;
                for (int axis = 0; axis < 2; ++axis) {
                    CHECK(std::abs(middle[axis] - image.mean[axis]) < 0.3 * image.deviation[axis]);
                    CHECK(deviation[axis] > 0.88 * image.deviation[axis]);
                    CHECK(deviation[axis] < (well_inside ? 1.13 : 1.25) * image.deviation[axis]);
                }
                // No window holds more of the beam than of its spot; at the rim, a fifth more. 1 % for the
                // count of rays.
                CHECK(image.densest < (well_inside ? 1.01 : 1.2));
            }
        }
}

TEST_CASE("the spots of an image hold what passed the pupil, for every focus") {
    Design design = line_of_emitters(7, 60e-6, radians(20));
    design.emitters.layout.rows = 5;
    SUBCASE("bare") {}
    SUBCASE("lens") {
        design.optics.elements = {Lens{.focal_length = 4e-3, .clear_aperture = 6e-3, .defocus = 50e-6}};
    }
    SUBCASE("diffuser") {
        design.optics.elements = {Diffuser{
            .horizontal = radians(60), .vertical = radians(40), .roll_off = radians(3), .distance = 1e-3}};
    }
    const FarField field = field_of(design);
    RandomStream random(72);
    for (int i = 0; i < 200; ++i) {
        const Vec3 place = (0.1 + random.uniform()) *
                           Vec3(1, 0.4 * random.uniform() - 0.2, 0.4 * random.uniform() - 0.2).normalized();
        const EnteringLight light = entering_light(field, {.place = place}, pulse_width);
        double beams = 0;
        for (const EnteringBeam& beam : light.beams) beams += beam.energy;
        CHECK(beams == light.passed);
        for (const double vergence : vergences(light)) {
            const std::vector<Spot> spots = retinal_image(light, vergence);
            CHECK(spots.size() == light.beams.size());
            CHECK(energy_of(spots) == light.passed);
            for (const Spot& spot : spots) CHECK(spot.half.minCoeff() > 0);
        }
    }
}

TEST_CASE("foci tried: all of accommodation, and where the beams come from") {
    const EnteringLight near = entering_light(bare(radians(20)), {.place = Vec3(0.15, 0, 0)}, pulse_width);
    const std::vector<double> tried = vergences(near);
    CHECK(std::ranges::is_sorted(tried));
    CHECK(tried.front() == 0);
    CHECK(tried.back() == 10);
    CHECK(std::ranges::any_of(tried, [](double v) { return std::abs(v - 1 / 0.15) < 1e-3; }));
    // A beam that diverges from f^2/defocus behind a lens: that far, seen from the eye.
    const FarField field = behind_lens(4e-3, -0.2e-3);
    const EnteringLight behind = entering_light(field, {.place = Vec3(0.1, 0, 0)}, pulse_width);
    const double focus = 0.1 - 4e-3 + 1 / field.beams.front().curvature;
    CHECK(std::ranges::any_of(vergences(behind), [&](double v) { return std::abs(v - 1 / focus) < 1e-3; }));
}

TEST_CASE("foci on both sides of where the whole image becomes as large as asked") {
    // A bare emitter at 150 mm: sharp at 1/0.15 dioptres, blurred by the pupil on both sides of that.
    const EnteringLight light = entering_light(bare(radians(20)), {.place = Vec3(0.15, 0, 0)}, pulse_width);
    const std::vector<double> tried = vergences(light);
    const double subtense = 5e-3;
    const std::vector<double> found = crossings(light, tried, std::array{subtense});
    REQUIRE(found.size() == 4);
    for (std::size_t i = 0; i < found.size(); i += 2) {
        const double one = whole_subtense(retinal_image(light, found[i])),
                     other = whole_subtense(retinal_image(light, found[i + 1]));
        CHECK((one > subtense) != (other > subtense));
        // Foci 3e-4 dioptres apart at most; the blur changes by 7 mm a dioptre times 0.88 (side of the square
        // over the pupil's diameter) or less.
        CHECK(std::abs(one - other) < 3e-4 * 7e-3);
    }
    CHECK(crossings(light, tried, std::array{0.5}).empty());
}

TEST_CASE("a relaxed eye sees the divergence of a beam, wherever it stands") {
    // Schulmeister, BiOS Ophthalmic Technologies XV (2005) 401-410: focused at infinity, the subtense is that
    // of the far field. A pupil wide enough not to cut; 1e-3 for what it cuts all the same.
    for (const double defocus : {0.0, 30e-6, -30e-6}) {
        const FarField field = behind_lens(4e-3, defocus);
        for (const double distance : {0.1, 0.5, 2.0}) {
            const EnteringLight light =
                entering_light(field, {.place = Vec3(distance, 0, 0), .pupil_radius = 1}, pulse_width);
            const Spot spot = retinal_image(light, 0).front();
            CHECK(spot.half.x() ==
                  about(half_over_deviation / 2 * field.beams.front().kernel.a).epsilon(1e-3));
        }
    }
}

TEST_CASE("an eye focused on a bare emitter sees its size over the distance") {
    for (const double distance : {0.1, 0.3, 1.0}) {
        const EnteringLight light =
            entering_light(bare(radians(20)), {.place = Vec3(distance, 0, 0)}, pulse_width);
        const Spot spot = retinal_image(light, 1 / distance).front();
        CHECK(spot.half.x() == about(half_over_deviation / 2 * emitter_radius / distance).epsilon(1e-6));
        CHECK(spot.middle.norm() < 1e-12);
    }
}

TEST_CASE("spots of a bare array sit at pitch over distance when the eye is focused on it") {
    const FarField field = field_of(line_of_emitters(5, 200e-6, radians(20)));
    for (const double distance : {0.1, 0.4}) {
        std::vector<Spot> spots =
            retinal_image(entering_light(field, {.place = Vec3(distance, 0, 0)}, pulse_width), 1 / distance);
        REQUIRE(spots.size() == 5);
        std::ranges::sort(spots, {}, [](const Spot& spot) { return spot.middle.x(); });
        for (std::size_t i = 1; i < 5; ++i)
            CHECK(spots[i].middle.x() - spots[i - 1].middle.x() == about(200e-6 / distance).epsilon(1e-6));
    }
    // Off the axis, the row is seen under an angle: cos of it shorter, and at the distance along the line of
    // sight.
    const double angle = radians(15);
    const EyePlace eye{.place = 0.1 * Vec3(std::cos(angle), std::sin(angle), 0)};
    std::vector<Spot> spots = retinal_image(entering_light(field, eye, pulse_width), 10);
    REQUIRE(spots.size() == 5);
    std::ranges::sort(spots, {}, [](const Spot& spot) { return spot.middle.x(); });
    CHECK(spots[4].middle.x() - spots[0].middle.x() == about(800e-6 * std::cos(angle) / 0.1).epsilon(1e-3));
    CHECK((spots[2].middle - line_of_sight(eye)).norm() < 1e-6);
}

TEST_CASE("behind a lens spots are pitch over focal length apart for a relaxed eye") {
    // Tangent lens: slopes x/f exactly. A wide pupil, which does not shift the spots.
    Design design = line_of_emitters(5, 50e-6, radians(20));
    design.optics.elements = {Lens{.focal_length = 4e-3, .clear_aperture = 8e-3}};
    const FarField field = field_of(design);
    for (const double distance : {0.1, 0.5}) {
        std::vector<Spot> spots = retinal_image(
            entering_light(field, {.place = Vec3(distance, 0, 0), .pupil_radius = 1}, pulse_width), 0);
        REQUIRE(spots.size() == 5);
        std::ranges::sort(spots, {}, [](const Spot& spot) { return spot.middle.x(); });
        for (std::size_t i = 1; i < 5; ++i)
            CHECK(spots[i].middle.x() - spots[i - 1].middle.x() == about(50e-6 / 4e-3).epsilon(1e-4));
    }
}
