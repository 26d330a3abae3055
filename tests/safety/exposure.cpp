// What an aperture collects, and the pulse criteria over the firing plan.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/emitter/array.h>
#include <glint/safety/collection.h>
#include <glint/safety/exposure.h>
#include <glint/safety/small_source.h>

#include <algorithm>
#include <cmath>

using namespace glint;

namespace {

Design single_emitter(double wavelength) {
    Design design;
    design.emitters.wavelength = wavelength;
    design.emitters.aperture = 10e-6;
    design.emitters.layout = {.kind = LayoutKind::grid, .rows = 1, .columns = 1, .pitch = 40e-6};
    design.emitters.lobe = {.divergence = radians(20)};
    design.drive = {.peak_power = 0.1, .pulse_width = 5e-9};
    design.firing = {.shots = 1, .repetition = 10e3};
    return design;
}

struct Bench {
    Design design;
    EmitterArray array;
    FiringPlan plan;
    FarField field;
    explicit Bench(Design d)
        : design(std::move(d)),
          array(build_array(design.emitters, field_sense(design.optics), "")),
          plan(plan_firing(design, array)),
          field(far_field(project(array, design))) {}
};

const ExposureCase& case_of(const std::vector<ExposureCase>& cases, PulseCriterion criterion) {
    const auto found = std::ranges::find(cases, criterion, &ExposureCase::criterion);
    REQUIRE(found != cases.end());
    return *found;
}

}  // namespace

TEST_CASE("collection through 7 mm at 100 mm and 50 mm at 2 m, Gaussian of 20 degrees") {
    // Derived: d86 = 2 * 100 mm * tan 10 deg = 35.265 mm; 1 - exp(-2 (7 / 35.265)^2) = 0.075776; 50 mm at 2
    // m: 0.010001.
    const Bench bench(single_emitter(940e-9));
    const Beam& beam = bench.field.beams.front();
    CHECK(collected_share(beam, {.centre = Vec3(0.1, 0, 0), .radius = 3.5e-3}) ==
          about(0.075776).epsilon(1e-3));
    CHECK(collected_share(beam, {.centre = Vec3(2, 0, 0), .radius = 25e-3}) == about(0.010001).epsilon(1e-3));
}

TEST_CASE("play never lowers what is collected anywhere within it") {
    Design design = single_emitter(940e-9);
    SUBCASE("bare") {}
    SUBCASE("lens") {
        design.optics.elements = {Lens{.focal_length = 2e-3, .clear_aperture = 3e-3, .defocus = 50e-6}};
    }
    SUBCASE("diffuser") {
        design.optics.elements = {Diffuser{
            .horizontal = radians(40), .vertical = radians(30), .roll_off = radians(2), .exponent = 3}};
    }
    const Bench bench(design);
    const Beam& beam = bench.field.beams.front();
    RandomStream random(6);
    for (int trial = 0; trial < 500; ++trial) {
        const Vec3 centre =
            0.1 * Vec3(1, 0.4 * random.uniform() - 0.2, 0.4 * random.uniform() - 0.2).normalized();
        const double play = 1e-3 * random.uniform();
        const Vec3 aside =
            centre.cross(Vec3(random.uniform(), random.uniform(), random.uniform())).normalized();
        const double bound = collected_share(beam, {.centre = centre, .radius = 3.5e-3, .play = play});
        const double there =
            collected_share(beam, {.centre = centre + 0.99 * play * aside, .radius = 3.5e-3});
        CHECK(bound >= there * (1 - 5e-3));  // wide kernels are bounded by the samples met, dense to 0.5 %
    }
}

TEST_CASE("a regular train from one zone gives the limits of the published rules") {
    // 905 nm, 5 ns, derived from the 2014 rules: at 1 kHz, 10 kHz, 60 Hz and 1 MHz the limits per pulse are
    // C5 9.8960e-8, C5 7.9168e-8, single 1.9792e-7 and average 1.0025e-9 J.
    struct Row {
        double repetition;
        PulseCriterion governs;
        double energy;
        double tolerance;
    };
    // 60 Hz: the plan counts the frame that begins within 10 s, 601 instead of 600, where C5 is still 1. 1
    // kHz and 10 kHz the same: one frame in 1e4. Whole frames are counted upward, so the plan may be stricter
    // by that much.
    for (const Row& row :
         {Row{1e3, PulseCriterion::train, 9.8960e-8, 3e-4}, Row{10e3, PulseCriterion::train, 7.9168e-8, 3e-4},
          Row{60, PulseCriterion::train, 1.9792e-7, 3e-4},
          Row{1e6, PulseCriterion::average, 1.0025e-9, 3e-4}}) {
        Design design = single_emitter(905e-9);
        design.firing.repetition = row.repetition;
        const Bench bench(design);
        const DwellEnergy unit[] = {{0, 1e-7}};
        const auto cases = judge(
            bench.plan, unit, {.laser_class = LaserClass::class_1, .wavelength = 905e-9, .time_base = 100});
        const auto worst = std::ranges::max_element(cases, {}, &ExposureCase::ratio);
        CHECK(1e-7 / worst->ratio() == about(row.energy).epsilon(row.tolerance));
        if (row.repetition != 60)
            CHECK(worst->criterion == row.governs);  // at 60 Hz C5 = 1: train and single are equal
    }
}

TEST_CASE("pulses within Ti are one group") {
    // 1 MHz, Ti = 5 us: 5 intervals, so up to 6 starts lie within a closed 5 us; 5 within half open. The
    // stricter counts.
    Design design = single_emitter(905e-9);
    design.firing = {.shots = 1000, .repetition = 1e6};
    const Bench bench(design);
    const DwellEnergy unit[] = {{0, 1e-9}};
    const auto cases =
        judge(bench.plan, unit, {.laser_class = LaserClass::class_1, .wavelength = 905e-9, .time_base = 100});
    const ExposureCase& group = case_of(cases, PulseCriterion::group);
    CHECK(group.pulses == 6);
    CHECK(group.ael ==
          about(1.9025e-7).epsilon(1e-3));  // 7e-4 C4 (5e-6)^0.75, the smaller of the two cells that meet
}

TEST_CASE("a burst counts as one emission of its length") {
    // 940 nm, 2 ns at 10 MHz in 500 us bursts, 30 bursts a second, C6 = 1: derived 4.7123e-9 J a pulse for C6
    // = 3.333, hence 1.4137e-9 J here.
    Design design = single_emitter(940e-9);
    design.drive.pulse_width = 2e-9;
    design.firing = {.shots = 5000, .repetition = 10e6, .frame_period = 1.0 / 30};
    const Bench bench(design);
    const DwellEnergy unit[] = {{0, 1e-9}};
    const auto cases =
        judge(bench.plan, unit, {.laser_class = LaserClass::class_1, .wavelength = 940e-9, .time_base = 100});
    double burst = 0;
    for (const ExposureCase& each : cases)
        if (each.criterion == PulseCriterion::average) burst = each.ratio();
    CHECK(burst >= 1e-9 / 1.4137e-9 * (1 - 1e-3));
}

TEST_CASE("the worst place is never missed: a raster of places against the search") {
    RandomStream random(12);
    for (int trial = 0; trial < 6; ++trial) {
        Design design = single_emitter(trial % 2 == 0 ? 940e-9 : 1550e-9);
        design.emitters.layout = {
            .kind = LayoutKind::grid, .rows = 3, .columns = 4, .pitch = (30 + 60 * random.uniform()) * 1e-6};
        design.emitters.addressing = {.scheme = AddressingScheme::columns};
        design.firing = {.shots = 20, .repetition = 100e3 + 1e6 * random.uniform()};
        design.drive.peak_power = trial % 2 == 0 ? 0.02 : 20;
        if (trial < 4)
            design.optics.elements = {Lens{.focal_length = (1 + 2 * random.uniform()) * 1e-3,
                                           .clear_aperture = 3e-3,
                                           .defocus = 60e-6 * random.uniform()}};
        const Bench bench(design);
        const SafetyVerdict verdict = judge_small_source(bench.design, bench.plan, bench.field);
        double slow = 0;
        for (double y = -0.35; y <= 0.35; y += 0.004)
            for (double z = -0.35; z <= 0.35; z += 0.004) {
                const MeasurementCondition at =
                    measurement(Condition::naked_eye, bench.design.emitters.wavelength, 1e-9);
                const Aperture aperture{.centre = at.distance * Vec3(std::sqrt(1 - y * y - z * z), y, z),
                                        .radius = at.aperture / 2};
                const auto zones = collected_energies(bench.field, aperture, bench.plan.pulse_width);
                for (const ExposureCase& each :
                     judge(bench.plan, dwell_energies(bench.plan, zones),
                           {LaserClass::class_1, bench.design.emitters.wavelength, 100}))
                    // Beyond 1400 nm durations above 0.35 s are taken through a larger aperture than this
                    // one.
                    if (trial % 2 == 0 || each.duration <= 0.35) slow = std::max(slow, each.ratio());
            }
        double found = 0;
        for (const ExposureCase& each : verdict.criteria)
            if (each.condition == Condition::naked_eye) found = std::max(found, each.ratio());
        CHECK(found >= slow * (1 - 1e-9));
        // 3 % of the search, 1 % for what a raster of 0.4 mm misses.
        if (trial % 2 == 0) CHECK(found <= slow * 1.04);
    }
}

TEST_CASE("ratios scale with power, and a stronger chip is never in a lower class") {
    Design design = single_emitter(905e-9);
    design.emitters.layout = {.kind = LayoutKind::grid, .rows = 4, .columns = 4, .pitch = 40e-6};
    design.optics.elements = {Lens{.focal_length = 2e-3, .clear_aperture = 3e-3}};
    double before = 0;
    LaserClass class_before = LaserClass::class_1;
    for (const double power : {0.001, 0.01, 0.1, 1.0, 10.0, 1000.0}) {
        design.drive.peak_power = power;
        const Bench bench(design);
        const SafetyVerdict verdict = judge_small_source(bench.design, bench.plan, bench.field);
        if (before > 0) CHECK(verdict.worst_ratio / before == about(power >= 1000 ? 100 : 10).epsilon(1e-9));
        CHECK(static_cast<int>(verdict.laser_class) >= static_cast<int>(class_before));
        before = verdict.worst_ratio;
        class_before = verdict.laser_class;
    }
    CHECK(class_before == LaserClass::class_4);
}
