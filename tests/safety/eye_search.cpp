// What the eye search rests on: its raster of places leaves no beam out, and the image that stands for many
// is no easier on the eye than any of them.
#include "about.h"

#include "safety/eye_places.h"
#include "safety/hardest_image.h"

#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/safety/collection.h>
#include <glint/safety/window_search.h>

#include <doctest/doctest.h>
#include <algorithm>
#include <cmath>

using namespace glint;

namespace {

Design array_of(int side, double pitch) {
    Design design;
    design.emitters.wavelength = 940e-9, design.emitters.aperture = 10e-6;
    design.emitters.layout = {.rows = side, .columns = side, .pitch = pitch};
    design.emitters.addressing.scheme = AddressingScheme::individual;
    design.emitters.lobe.divergence = radians(20);
    design.drive = {.peak_power = 0.1, .pulse_width = 5e-9};
    design.firing = {.shots = 3, .repetition = 500e3, .gap = 1e-5};
    return design;
}

struct Light {
    FarField field;
    TimePattern pattern;
    std::vector<int> dwell_of_zone;
};

Light light_of(const Design& design) {
    const EmitterArray array = build_array(design.emitters, field_sense(design.optics), {});
    const FiringPlan plan = plan_firing(design, array);
    Light light{far_field(project(array, design), Merge::no),
                time_pattern(plan, {.wavelength = design.emitters.wavelength}),
                std::vector<int>(static_cast<std::size_t>(array.zones))};
    for (int dwell = 0; dwell < plan.dwells(); ++dwell)
        for (const int zone : plan.zones_of(dwell)) light.dwell_of_zone[zone] = dwell;
    return light;
}

}  // namespace

TEST_CASE("some place of the raster gets nearly all of what any place gets of a beam") {
    Design design = array_of(5, 100e-6);
    SUBCASE("narrow beams") {
        design.optics.elements = {Lens{.focal_length = 4e-3, .clear_aperture = 6e-3, .blur = 0.5e-3}};
    }
    SUBCASE("wide beams") {
        design.optics.elements = {Lens{.focal_length = 4e-3, .clear_aperture = 6e-3, .blur = 20e-3}};
    }
    SUBCASE("bare") {}
    const FarField field = light_of(design).field;
    for (const double pupil : {3.5e-3, 25e-3})
        for (const double distance : {0.1, 0.5, 2.0, 10.0}) {
            if (pupil > 10e-3 && distance < 2) continue;
            CAPTURE(pupil);
            CAPTURE(distance);
            const std::vector<Vec3> places = all_places(field, distance, pupil);
            for (const Beam& beam : field.beams) {
                const auto share = [&](const Vec3& place) {
                    return collected_share(beam, {.centre = place, .radius = pupil});
                };
                // Where the beam itself meets the sphere around the origin.
                const double along =
                    -beam.origin.dot(beam.axis) + std::sqrt(std::pow(beam.origin.dot(beam.axis), 2) +
                                                            distance * distance - beam.origin.squaredNorm());
                const double most = share(beam.origin + along * beam.axis);
                double found = 0;
                for (const Vec3& place : places) found = std::max(found, share(place));
                // Half a diagonal of the raster away: 0.14 widths of a wide beam, exp(-2 * 0.14^2) = 0.96.
                // For a narrow one 0.35 pupils, so that it is nearly whole. What is left the search makes up
                // by smaller steps.
                CHECK(found >= 0.95 * most);
            }
        }
}

TEST_CASE("the hardest image is no easier on the eye than any image it stands for") {
    RandomStream random(91);
    Design design = array_of(4, 300e-6);
    design.emitters.near_field_radius = 0.3e-3;  // spots wider than alpha_min, so that their size counts
    const Light light = light_of(design);
    REQUIRE(light.field.alike);
    for (int trial = 0; trial < 20; ++trial) {
        std::vector<EnteringLight> lights;
        ImageExtremes extremes;
        for (int i = 0; i < 5; ++i) {
            const Vec3 towards(1, 0.4 * random.uniform() - 0.2, 0.4 * random.uniform() - 0.2);
            const double distance = 0.1 + 0.1 * random.uniform();
            lights.push_back(entering_light(light.field, {.place = distance * towards.normalized()},
                                            light.pattern.plan.pulse_width));
            const ImageExtremes here = extremes_of(lights.back(), vergences(lights.back()));
            if (i == 0)
                extremes = here;
            else
                include(extremes, here);
        }
        const auto ratios_of = [&](std::span<const Spot> image, std::optional<Interval> whole) {
            return search_windows(light.pattern, image, light.dwell_of_zone, {}, 0, whole).parts;
        };
        const WorstImageParts hardest = ratios_of(hardest_image(lights.front(), extremes), extremes.whole);
        for (const EnteringLight& each : lights)
            for (const double vergence : vergences(each)) {
                const WorstImageParts own = ratios_of(retinal_image(each, vergence), {});
                // Images of one field at different places are alike to a thousandth.
                for (std::size_t c = 0; c < 4; ++c)
                    CHECK(hardest[c].worst.ratio >= own[c].worst.ratio * (1 - 2e-3));
            }
    }
}
