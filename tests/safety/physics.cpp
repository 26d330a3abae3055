// What the eye search must find whatever the numbers: where the worst place is, and what may not make it
// worse.
#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/safety/eye_search.h>
#include "about.h"

#include <omp.h>
#include <algorithm>
#include <array>
#include <cmath>
#include <numeric>
#include <vector>

using namespace glint;

namespace {

// An array in one zone, 20 shots a frame.
Design array_of(int rows, int columns, double pitch) {
    Design design;
    design.emitters.wavelength = 940e-9;
    design.emitters.aperture = 10e-6;
    design.emitters.layout = {.kind = LayoutKind::grid, .rows = rows, .columns = columns, .pitch = pitch};
    design.emitters.addressing = {.scheme = AddressingScheme::blocks, .rows = 1, .columns = 1};
    design.emitters.lobe = {.divergence = radians(20)};
    design.drive = {.peak_power = 0.1, .pulse_width = 5e-9};
    design.firing = {.shots = 20, .repetition = 500e3, .frame_period = 20e-3};
    return design;
}

Design behind_lens(Design design, double defocus = 0) {
    design.optics.elements = {Lens{.focal_length = 4e-3, .clear_aperture = 6e-3, .defocus = defocus}};
    return design;
}

// Everything between a design and its worst place.
struct Bench {
    Design design;
    EmitterArray array;
    TimePattern pattern;
    FarField field;

    explicit Bench(Design d)
        : design(std::move(d)),
          array(build_array(design.emitters, field_sense(design.optics), "")),
          pattern(time_pattern(plan_firing(design, array), {.wavelength = design.emitters.wavelength})),
          field(far_field(project(array, design), Merge::no)) {}

    [[nodiscard]] EyeQuestion question(Condition condition) const {
        return {.pattern = pattern,
                .field = field,
                .condition = condition,
                .closest_access = design.eye_safety.closest_access};
    }
    [[nodiscard]] EyeSearch naked_eye() const { return search_eyes(question(Condition::naked_eye), {}); }
    [[nodiscard]] EyeSearch both() const {
        return search_eyes(question(Condition::naked_eye), search_eyes(question(Condition::telescope), {}));
    }
    [[nodiscard]] EyeSearch at(const Vec3& place) const {
        return search_eyes_at(question(Condition::naked_eye), std::array{place}, {});
    }
};

const EyeCase& worst_of(const EyeSearch& found) {
    return *std::ranges::max_element(found.worst, {},
                                     [](const EyeCase& each) { return each.part.worst.ratio; });
}

// Nothing in front of the module is worse than the nearest place on the axis, but for what the search itself
// leaves open.
void check_nearest_is_worst(const Design& design, double nearest) {
    const Bench bench(design);
    const double there = bench.at({nearest, 0, 0}).worst_ratio();
    const double found = bench.naked_eye().worst_ratio();
    CHECK(there > 0);
    CHECK(found >= there / (1 + search_slack));
    CHECK(found <= there * (1 + search_slack));
}

}  // namespace

TEST_CASE("a bare array is worst at 100 mm, or as near as it can be reached") {
    // The light through the pupil falls as 1/r^2 and the limit as 1/r. An array of 0.35 mm: within 5 mrad
    // everywhere.
    Design design = array_of(8, 8, 50e-6);
    const EyeCase nearest = worst_of(Bench(design).naked_eye());
    CHECK(nearest.eye.place.norm() == about(0.1).epsilon(1e-9));
    CHECK(std::hypot(nearest.eye.place.y(), nearest.eye.place.z()) < 1e-3);
    CHECK(nearest.part.subtense > 3.5e-3);
    design.eye_safety.closest_access = 0.2;
    CHECK(worst_of(Bench(design).naked_eye()).eye.place.norm() == about(0.2).epsilon(1e-9));
    const Bench bench(design);
    CHECK(worst_of(search_eyes(bench.question(Condition::telescope), {})).eye.place.norm() ==
          about(2).epsilon(1e-9));
}

TEST_CASE("a Lambertian diffuser is worst at 100 mm") {
    // Patches of 40 um on the diffuser, which lies on the chip: the eye can focus on it from 100 mm. n = -1:
    // intensity as the cosine; 80 degrees hold 97 % of a half space.
    Design design = array_of(3, 3, 100e-6);
    design.emitters.near_field_radius = 20e-6;
    design.optics.elements = {Diffuser{.shape = FieldShape::round,
                                       .diameter = radians(160),
                                       .roll_off = radians(1),
                                       .exponent = -1,
                                       .distance = 0}};
    CHECK(worst_of(Bench(design).naked_eye()).eye.place.norm() == about(0.1).epsilon(1e-9));
    check_nearest_is_worst(design, 0.1);
}

TEST_CASE("a point behind a lens is worst at the nearest place when its beam does not converge") {
    // 3 um over 4 mm: 0.75 mrad, a point for every eye. All of the beam enters near the lens, less farther
    // on.
    Design design = array_of(1, 1, 50e-6);
    design.emitters.near_field_radius = 3e-6;
    SUBCASE("collimated") { design = behind_lens(design); }
    SUBCASE("diverging") { design = behind_lens(design, -40e-6); }
    SUBCASE("collimated, out of reach") {
        design = behind_lens(design);
        design.eye_safety.closest_access = 0.5;
    }
    check_nearest_is_worst(design, std::max(0.1, design.eye_safety.closest_access));
}

TEST_CASE("with distance the ratio falls as 1/r, and as 1/r^2 once the array is a point") {
    const Bench bench(array_of(8, 8, 50e-6));
    constexpr std::size_t single = static_cast<std::size_t>(PulseCriterion::single);
    const auto ratio = [&](double distance) {
        return bench.at({distance, 0, 0}).worst[single].part.worst.ratio;
    };
    // 3.6 mrad and 1.8 mrad; the pupil takes 0.0758 of a beam at 100 mm and 4 * 0.0195 as much at 200 mm: 3
    // %.
    CHECK(ratio(0.1) * 0.1 == about(ratio(0.2) * 0.2).epsilon(0.04));
    CHECK(ratio(0.5) * 0.25 == about(ratio(1)).epsilon(5e-3));
    CHECK(ratio(1) == about(ratio(2) * 4).epsilon(2e-3));
}

TEST_CASE("zones that fire apart in time are never worse than all of them at once") {
    RandomStream random(81);
    for (int i = 0; i < 6; ++i) {
        const int rows = 2 + static_cast<int>(random.below(3)),
                  columns = 2 + static_cast<int>(random.below(3));
        Design whole = array_of(rows, columns, 30e-6 + 120e-6 * random.uniform());
        whole.firing.shots = 1 + static_cast<int>(random.below(20));
        whole.firing.frame_period = 0.08;
        if (i % 2 == 1) whole = behind_lens(whole, 100e-6 * random.uniform() - 50e-6);
        Design split = whole;
        split.emitters.addressing = {.scheme =
                                         i % 3 == 0 ? AddressingScheme::individual : AddressingScheme::rows};
        split.firing.gap = 5e-3;
        const double together = Bench(whole).naked_eye().worst_ratio(),
                     apart = Bench(split).naked_eye().worst_ratio();
        CAPTURE(i);
        CHECK(apart > 0);
        CHECK(apart <= together * search_allowance);
    }
}

TEST_CASE("the ratio is in proportion to the power") {
    for (const bool lens : {false, true}) {
        Design design = array_of(3, 4, 80e-6);
        if (lens) design = behind_lens(design, 30e-6);
        const EyeSearch before = Bench(design).both();
        design.drive.peak_power *= 4;
        const EyeSearch four = Bench(design).both();
        for (std::size_t c = 0; c < 4; ++c) {
            CHECK(before.worst[c].part.worst.ratio > 0);
            CHECK(four.worst[c].part.worst.ratio == 4 * before.worst[c].part.worst.ratio);
            CHECK(four.worst[c].eye.place == before.worst[c].eye.place);
            CHECK(four.worst[c].vergence == before.worst[c].vergence);
        }
        design.drive.peak_power *= 0.37;
        const EyeSearch other = Bench(design).both();
        for (std::size_t c = 0; c < 4; ++c)
            CHECK(other.worst[c].part.worst.ratio ==
                  about(4 * 0.37 * before.worst[c].part.worst.ratio).epsilon(1e-12));
    }
}

TEST_CASE("a quarter turn of the array changes nothing but what the search leaves open") {
    for (const bool lens : {false, true}) {
        Design lying = array_of(2, 5, 120e-6);
        lying.emitters.layout.row_pitch = 60e-6;
        if (lens) lying = behind_lens(lying, -30e-6);
        Design standing = lying;
        standing.emitters.layout.rows = 5, standing.emitters.layout.columns = 2;
        standing.emitters.layout.pitch = 60e-6, standing.emitters.layout.row_pitch = 120e-6;
        CHECK(Bench(standing).both().worst_ratio() ==
              about(Bench(lying).both().worst_ratio()).epsilon(search_slack));
    }
}

TEST_CASE("the search is the same for any number of threads") {
    Design design = behind_lens(array_of(4, 4, 70e-6), 20e-6);
    design.emitters.addressing = {.scheme = AddressingScheme::rows};
    const Bench bench(design);
    const int before = omp_get_max_threads();
    omp_set_num_threads(1);
    const EyeSearch one = bench.both();
    for (const int threads : {2, 3}) {
        omp_set_num_threads(threads);
        const EyeSearch several = bench.both();
        CHECK(several.known == one.known);
        CHECK(several.work.places == one.work.places);
        CHECK(several.work.images == one.work.images);
        CHECK(several.work.skipped == one.work.skipped);
        CHECK(several.work.families == one.work.families);
        for (std::size_t c = 0; c < 4; ++c) {
            const EyeCase &a = several.worst[c], &b = one.worst[c];
            CHECK(a.condition == b.condition);
            CHECK(a.eye.place == b.eye.place);
            CHECK(a.vergence == b.vergence);
            CHECK(a.part.worst.ratio == b.part.worst.ratio);
            CHECK(a.part.low == b.part.low);
            CHECK(a.part.high == b.part.high);
            CHECK(a.part.zones == b.part.zones);
        }
    }
    omp_set_num_threads(before);
}

TEST_CASE("no eye at random finds more than the search allows for") {
    RandomStream random(82);
    for (int i = 0; i < 6; ++i) {
        Design design = array_of(2 + static_cast<int>(random.below(3)), 2 + static_cast<int>(random.below(3)),
                                 30e-6 + 150e-6 * random.uniform());
        design.emitters.addressing = {.scheme = AddressingScheme::individual};
        design.firing.frame_period = 0.05;
        if (i % 2 == 1) design = behind_lens(design, 200e-6 * random.uniform() - 100e-6);
        const Bench bench(design);
        const EyeSearch found = bench.naked_eye();
        std::vector<int> dwell_of_zone(static_cast<std::size_t>(bench.field.zones));
        std::iota(dwell_of_zone.begin(), dwell_of_zone.end(), 0);
        double most = 0;
        for (int k = 0; k < 300; ++k) {
            const double distance = 0.1 * std::pow(50, random.uniform());
            const Vec3 place =
                distance * Vec3(1, 0.1 * random.uniform() - 0.05, 0.1 * random.uniform() - 0.05).normalized();
            const EnteringLight light =
                entering_light(bench.field, {.place = place}, bench.pattern.plan.pulse_width);
            const WindowSearch windows = search_windows(
                bench.pattern, retinal_image(light, 10 * random.uniform()), dwell_of_zone, {}, 0);
            for (const ImagePart& part : windows.parts) most = std::max(most, part.worst.ratio);
        }
        CAPTURE(i);
        CHECK(most > 0);
        CHECK(most <= found.worst_ratio() * search_allowance);
    }
}
