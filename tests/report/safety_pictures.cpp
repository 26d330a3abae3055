// Pictures that explain the verdict: the data behind them against the verdict, and that the pictures show it.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/report/heat_map.h>
#include <glint/report/safety_pictures.h>
#include <glint/safety/explain.h>

#include <doctest/doctest.h>
#include <omp.h>
#include <algorithm>
#include <cmath>
#include <numeric>
#include <set>

using namespace glint;

namespace {

constexpr double viewing_time = 100;  // s, of every design here
// The search takes edges of spots within a thousandth of a spot as one, across and up.
constexpr double edges_as_one = 2e-3;

// 6 by 4 emitters in six zones behind a lens.
Design lens_design() {
    Design design;
    design.emitters.wavelength = 905e-9;
    design.emitters.aperture = 10e-6;
    design.emitters.layout = {.kind = LayoutKind::grid, .rows = 4, .columns = 6, .pitch = 40e-6};
    design.emitters.addressing = {.scheme = AddressingScheme::blocks, .rows = 2, .columns = 3};
    design.emitters.lobe.divergence = radians(20);
    design.drive.peak_power = 1;
    design.drive.pulse_width = 3e-9;
    design.firing.shots = 20;
    design.firing.repetition = 500e3;
    design.firing.frame_period = 10e-3;
    design.optics.elements = {
        Lens{.focal_length = 3e-3, .clear_aperture = 4e-3, .defocus = 100e-6, .transmission = 0.95}};
    design.eye_safety.time_base = viewing_time;
    return design;
}

Design diffuser_design() {
    Design design = lens_design();
    design.firing.repetition = 5e6;
    design.firing.shots = 1000;
    design.optics.elements = {Diffuser{.shape = FieldShape::rectangle,
                                       .horizontal = radians(50),
                                       .vertical = radians(30),
                                       .roll_off = radians(3),
                                       .distance = 1e-3}};
    return design;
}

// Beyond the retinal range: the governing limit counts all that enters.
Design corneal_design() {
    Design design = lens_design();
    design.emitters.wavelength = 1550e-9;
    return design;
}

SafetyVerdict judged(const Design& design) {
    return judge_safety(design, build_array(design.emitters, field_sense(design.optics), {}));
}

// A design, its verdict and its governing case.
struct Judged {
    Design design;
    SafetyVerdict verdict;
    GoverningCase governing;
};

Judged judged_case(const Design& design) {
    Judged judged_case{design, judged(design), {}};
    const std::optional<GoverningCase> governing = governing_case(judged_case.verdict, viewing_time);
    REQUIRE(governing);
    judged_case.governing = *governing;
    return judged_case;
}

const std::vector<Judged>& every_case() {
    static const std::vector<Judged> cases{judged_case(lens_design()), judged_case(diffuser_design()),
                                           judged_case(corneal_design())};
    return cases;
}

// Energy of the cells whose middle lies between two angles [J].
double energy_between(const GoverningImage& image, const Vec2& low, const Vec2& high) {
    const double cell = (image.high.x() - image.low.x()) / static_cast<double>(image.columns);
    double energy = 0;
    for (std::size_t i = 0; i < image.density.size(); ++i) {
        const Vec2 middle =
            image.low + cell * Vec2(static_cast<double>(i % image.columns) + 0.5,
                                    static_cast<double>(image.rows - 1 - i / image.columns) + 0.5);
        if ((middle.array() > low.array()).all() && (middle.array() < high.array()).all())
            energy += image.density[i] * cell * cell;
    }
    return energy;
}

std::size_t colours_in(const Canvas& canvas) {
    std::set<std::array<std::uint8_t, 3>> colours;
    for (std::size_t i = 0; i < canvas.pixels().size(); i += 3)
        colours.insert({canvas.pixels()[i], canvas.pixels()[i + 1], canvas.pixels()[i + 2]});
    return colours.size();
}

bool says(const Canvas& canvas, const std::string& words) {
    return std::ranges::any_of(
        canvas.labels(), [&](const Label& label) { return label.text.find(words) != std::string::npos; });
}

void check_texts(const Canvas& canvas) {
    for (std::size_t i = 0; i < canvas.labels().size(); ++i) {
        INFO(canvas.labels()[i].text);
        CHECK(canvas.page().holds(canvas.labels()[i].box));
        for (std::size_t k = 0; k < i; ++k)
            CHECK_FALSE(canvas.labels()[i].box.overlaps(canvas.labels()[k].box));
    }
}

}  // namespace

TEST_CASE("the raster of the governing image holds the energy of the spots inside it") {
    for (const auto& [design, verdict, governing] : every_case()) {
        const GoverningImage image = governing_image(verdict.light, governing);
        const EyeCase& found = governing.found;
        const EnteringLight entering =
            entering_light(verdict.light.field, found.eye, verdict.light.plan.pulse_width);
        const Vec2 sight = line_of_sight(found.eye);
        double inside = 0;
        for (const Spot& spot : retinal_image(entering, found.vergence)) {
            // The image's first axis runs to the left.
            const Vec2 middle(sight.x() - spot.middle.x(), spot.middle.y() - sight.y());
            const Vec2 low = (middle - spot.half).cwiseMax(image.low),
                       high = (middle + spot.half).cwiseMin(image.high);
            inside += spot.energy * (high - low).cwiseMax(0).prod() / (2 * spot.half).prod();
        }
        CHECK(image.shown == about(inside).epsilon(1e-9));
        CHECK(image.entering == about(entering.passed));
        CHECK(energy_between(image, image.low, image.high) == about(inside).epsilon(1e-9));
        CHECK(image.shown <= image.entering * (1 + 1e-9));
        CHECK((image.high - image.low).maxCoeff() / (image.high - image.low).minCoeff() < 2.6);
    }
}

TEST_CASE("the governing part lies where the image has its energy") {
    for (const auto& [design, verdict, governing] : every_case()) {
        const ExposureCase& worst = verdict.criteria.front();
        if (worst.mechanism != Mechanism::retinal_thermal || worst.criterion == PulseCriterion::train)
            continue;
        const GoverningImage image = governing_image(verdict.light, governing);
        CHECK((worst.part_low.array() > image.low.array()).all());
        CHECK((worst.part_high.array() < image.high.array()).all());
        // Every zone once is at least the mean of the pulses that count. Cells are taken whole: some of the
        // rim is lost.
        CHECK(energy_between(image, worst.part_low, worst.part_high) >
              0.9 * worst.ae / worst.pulses / allowance_for(governing.slack));
    }
}

TEST_CASE("the emission never falls with its duration, and meets its limit as the verdict says") {
    for (const auto& [design, verdict, governing] : every_case()) {
        const ExposureCase& worst = verdict.criteria.front();
        const EmissionCurve curve = emission_curve(verdict.light, governing);
        REQUIRE(curve.emission.size() == curve.durations.size());
        REQUIRE(curve.limit.size() == curve.durations.size());
        CHECK(curve.durations.front() == about(design.drive.pulse_width));
        CHECK(curve.durations.back() == about(viewing_time));
        CHECK(std::ranges::is_sorted(curve.durations));
        for (std::size_t i = 1; i < curve.emission.size(); ++i)
            CHECK(curve.emission[i] >= curve.emission[i - 1] * (1 - 1e-12));
        const auto at = std::ranges::find(curve.durations, worst.duration) - curve.durations.begin();
        REQUIRE(at < std::ssize(curve.durations));
        CHECK(curve.emission[at] == about(worst.ae).epsilon(edges_as_one));
        CHECK(worst.C5 * curve.limit[at] == about(worst.ael).epsilon(1e-9));
        // No other duration is worse.
        for (std::size_t i = 0; i < curve.durations.size(); ++i)
            if (!std::isnan(curve.limit[i]))
                CHECK(curve.emission[i] / curve.limit[i] <= verdict.worst_ratio * (1 + edges_as_one));
    }
}

TEST_CASE("limits of a part longer than alpha_max are left out") {
    Judged wide = every_case().front();
    wide.governing.found.part.high = wide.governing.found.part.low + Vec2(20e-3, 2e-3);
    wide.governing.found.part.subtense = 11e-3;
    const EmissionCurve curve = emission_curve(wide.verdict.light, wide.governing);
    CHECK(curve.allowed_from == about(0.01));  // alpha_max = 200 mrad sqrt(t) is 20 mrad at 10 ms
    for (std::size_t i = 0; i < curve.durations.size(); ++i)
        CHECK(std::isnan(curve.limit[i]) == (curve.durations[i] < 0.01 * (1 - 1e-8)));
}

TEST_CASE("the map has the verdict's ratio at the governing place, and no cell that the verdict excludes") {
    for (const auto& [design, verdict, governing] : every_case()) {
        const SafetyMap map = safety_map(verdict.light, governing);
        REQUIRE(map.ratios.size() == map.rows * map.columns);
        const double cell = (map.high.x() - map.low.x()) / static_cast<double>(map.columns);
        const Vec2 place = (map.governing - map.low) / cell;
        const Vec2 column_row(std::floor(place.x()), std::floor(place.y()));
        CHECK((place - column_row - Vec2(0.5, 0.5)).norm() < 1e-6);
        const std::size_t row = map.rows - 1 - static_cast<std::size_t>(column_row.y());
        const double there = map.ratios[row * map.columns + static_cast<std::size_t>(column_row.x())];
        // 3 % that the map may miss, 1 % that the search may have missed.
        CHECK(there > 0.97 * verdict.worst_ratio);
        CHECK(there < (1 + governing.slack) * verdict.worst_ratio);
        // The verdict's allowance is there so that no place gives more; the map's ratios have it once more.
        CHECK(*std::ranges::max_element(map.ratios) <= allowance_for(governing.slack) * verdict.worst_ratio);
        CHECK(std::ranges::count_if(map.ratios, [&](double ratio) {
                  return ratio > 0.1 * verdict.worst_ratio;
              }) > std::ssize(map.ratios) / 10);
    }
}

TEST_CASE("the map is the same for any number of threads") {
    const Judged& judged = every_case().front();
    const int before = omp_get_max_threads();
    omp_set_num_threads(1);
    const SafetyMap alone = safety_map(judged.verdict.light, judged.governing);
    omp_set_num_threads(3);
    CHECK(safety_map(judged.verdict.light, judged.governing).ratios == alone.ratios);
    omp_set_num_threads(before);
}

TEST_CASE("pictures of the verdict are not blank and their texts keep clear of each other") {
    for (const auto& [design, verdict, governing] : every_case()) {
        for (const auto& draw_picture :
             {retinal_image_picture, emission_limits_picture, safety_map_picture}) {
            const Canvas canvas = draw_picture(design, verdict);
            CHECK(colours_in(canvas) > 50);
            check_texts(canvas);
        }
        CHECK(says(emission_limits_picture(design, verdict), "AEL, Class 1"));
        CHECK(says(retinal_image_picture(design, verdict), " mrad") ==
              (verdict.criteria.front().mechanism == Mechanism::retinal_thermal));
    }
}

TEST_CASE("a margin that is asked for shows as a line and as cells") {
    const Judged& judged = every_case().front();
    SafetyVerdict verdict = judged.verdict;
    CHECK_FALSE(says(emission_limits_picture(judged.design, verdict), "AEL less"));
    verdict.asked_margin = 1 - verdict.worst_ratio / 2;  // used up twice
    CHECK(says(emission_limits_picture(judged.design, verdict), "AEL less"));
    CHECK(says(safety_map_picture(judged.design, verdict), "the asked margin is used up"));
    verdict.asked_margin = 0.5 * (1 - verdict.worst_ratio);
    REQUIRE(verdict.worst_ratio < 1);
    CHECK_FALSE(says(safety_map_picture(judged.design, verdict), "the asked margin is used up"));
}

TEST_CASE("without light the pictures say so") {
    Design design = lens_design();
    design.drive.peak_power = 0;
    const SafetyVerdict verdict = judged(design);
    CHECK_FALSE(governing_case(verdict, viewing_time));
    for (const auto& draw_picture : {retinal_image_picture, emission_limits_picture, safety_map_picture}) {
        const Canvas canvas = draw_picture(design, verdict);
        CHECK(says(canvas, "No light reaches"));
        check_texts(canvas);
    }
}

TEST_CASE("a mark stands around its rectangle with its word inside the plot") {
    HeatMap map{.rows = 2, .columns = 2, .values = {0, 0, 0, 0}};
    map.horizontal = map.vertical = {.label = "u", .unit = "", .range = {0, 2}};
    map.colours = {.label = "w", .unit = "", .range = AxisRange{0, 1}};
    const std::size_t plain = draw(map).labels().size();
    for (const double height : {0.5, 1.99}) {  // room over it, and none
        map.marks = {{{0.5, 0.2}, {1.5, height}, "here"}};
        const Canvas canvas = draw(map);
        REQUIRE(canvas.labels().size() == plain + 1);
        CHECK(says(canvas, "here"));
        check_texts(canvas);
    }
}
