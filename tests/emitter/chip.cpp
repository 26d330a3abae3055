// The chip at work: energy, an independent slow solver, the published array, and what drives the light.
#include "about.h"

#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/emitter/chip.h>

#include <doctest/doctest.h>
#include <algorithm>
#include <cmath>
#include <map>

using namespace glint;

namespace {

// A grid of individually addressed emitters that fire one after the other.
Design grid(int rows, int columns, double pitch) {
    Design design;
    Emitters& emitters = design.emitters;
    emitters.wavelength = 940e-9, emitters.aperture = 10e-6;
    emitters.layout = {.rows = rows, .columns = columns, .pitch = pitch};
    emitters.addressing.scheme = AddressingScheme::individual;
    emitters.heat.package_resistance = 0;
    design.drive = {.by = DriveBy::current, .current = 8e-3, .pulse_width = 3e-9};
    design.firing.repetition = 100e3;
    return design;
}

// All emitters in one zone, on all the time but for a moment.
Design always_on(int rows, int columns, double pitch) {
    Design design = grid(rows, columns, pitch);
    design.emitters.addressing = {.scheme = AddressingScheme::blocks, .rows = 1, .columns = 1};
    design.drive.pulse_width = 1 - 1e-9, design.firing.repetition = 1;
    return design;
}

struct Worked {
    Design design;
    EmitterArray array;
    FiringPlan plan;
    ChipModel model;
};

Worked worked(const Design& design) {
    const EmitterArray array = build_array(design.emitters, FieldSense::upright, {});
    const FiringPlan plan = plan_firing(design, array);
    return {design, array, plan, chip_model(design, array, plan)};
}

Design random_chip(RandomStream& random) {
    const auto between = [&](double low, double high) { return low + (high - low) * random.uniform(); };
    Design design = grid(1 + static_cast<int>(random.below(12)), 1 + static_cast<int>(random.below(12)),
                         between(20e-6, 80e-6));
    design.emitters.aperture = between(5e-6, 15e-6);
    design.emitters.layout.kind = random.below(2) == 0 ? LayoutKind::grid : LayoutKind::hexagonal;
    if (random.below(3) == 0) design.emitters.addressing.scheme = AddressingScheme::rows;
    design.emitters.diode.junctions = 1 + static_cast<int>(random.below(5));
    design.emitters.heat.substrate_thickness = between(50e-6, 300e-6);
    design.emitters.heat.package_resistance = between(0, 50);
    design.drive.current = between(2e-3, 30e-3);
    design.drive.pulse_width = 1e-9 * std::pow(100, random.uniform());
    design.firing.shots = 1 + static_cast<int>(random.below(20));
    design.firing.repetition = 1 / (design.drive.pulse_width * between(5, 200));
    design.firing.gap = between(0, 1e-5);
    return design;
}

// Average temperatures by summing every pair and going round until nothing moves; the end of a dwell by every
// pulse of it and of the frames before.
struct SlowChip {
    std::vector<double> average, last;
};

SlowChip slow_chip(const Worked& chip, double current) {
    const std::size_t n = chip.array.size();
    const FiringPlan& plan = chip.plan;
    const DiodeModel& diode = chip.model.diode.model;
    const Substrate& substrate = chip.model.substrate;
    const double self = self_resistance(chip.design.emitters.aperture, substrate);
    const double duty = plan.shots * plan.pulse_width / plan.frame_period;
    const auto Z = [&](double t) {
        return t > 0 ? junction_step(chip.design.emitters.aperture, substrate, t, self) : 0;
    };
    const auto distance = [&](std::size_t i, std::size_t j) {
        return (chip.array.positions[i] - chip.array.positions[j]).norm();
    };
    std::vector<int> dwell_of(n);
    for (int d = 0; d < plan.dwells(); ++d)
        for (const int zone : plan.zones_of(d))
            for (std::size_t i = 0; i < n; ++i)
                if (chip.array.zone_of[i] == zone) dwell_of[i] = d;
    // What the pulses of this dwell, and of 30 frames before it, leave at the end of the last pulse; what
    // came before is steady by then.
    const auto rise_of_dwell = [&](std::size_t i, std::size_t j) {
        const auto step = [&](double t) {
            if (i == j) return Z(t);
            return t > 0 ? std::min(coupling(distance(i, j), substrate),
                                    point_step(substrate, distance(i, j), t))
                         : 0;
        };
        const double steady = i == j ? self : coupling(distance(i, j), substrate);
        constexpr int frames = 30;
        double sum = 0;
        for (int frame = 0; frame <= frames; ++frame)
            for (int k = 0; k < plan.shots; ++k) {
                const double ago = frame * plan.frame_period + k * plan.shot_period;
                sum += step(ago + plan.pulse_width) - step(ago);
            }
        return sum + duty * (steady - step((frames + 1) * plan.frame_period)) - duty * steady;
    };
    // Many pairs are equally far apart: each distance is worked out once.
    std::map<long, double> of_distance;  // by picometres
    std::vector<double> above(n, 0.0);
    for (std::size_t i = 0; i < n; ++i)
        for (std::size_t j = 0; j < n; ++j) {
            if (dwell_of[i] != dwell_of[j]) continue;
            const auto [known, is_new] = of_distance.try_emplace(std::lround(1e12 * distance(i, j)), 0);
            if (is_new) known->second = rise_of_dwell(i, j);
            above[i] += known->second;
        }
    SlowChip slow{std::vector<double>(n, chip.model.sink_temperature), {}};
    std::vector<double> heat(n, 0.0);
    for (int round = 0; round < 300; ++round) {
        for (std::size_t i = 0; i < n; ++i) {
            double middle = slow.average[i];
            for (int inner = 0; inner < 60; ++inner)
                middle = slow.average[i] + above[i] / 2 * operate(diode, current, middle).heat;
            heat[i] = operate(diode, current, middle).heat;
        }
        double most = 0, all = 0;
        for (const double each : heat) all += duty * each;
        for (std::size_t i = 0; i < n; ++i) {
            double rise = self * duty * heat[i] + chip.design.emitters.heat.package_resistance * all;
            for (std::size_t j = 0; j < n; ++j)
                if (j != i) rise += coupling(distance(i, j), substrate) * duty * heat[j];
            const double now = chip.model.sink_temperature + rise;
            most = std::max(most, std::abs(now - slow.average[i]));
            slow.average[i] = now;
        }
        if (most < 1e-9) break;
    }
    for (std::size_t i = 0; i < n; ++i) slow.last.push_back(slow.average[i] + above[i] * heat[i]);
    return slow;
}

}  // namespace

TEST_CASE("energy closes for every emitter and for the chip") {
    RandomStream random(11);
    for (int i = 0; i < 20; ++i) {
        const Worked chip = worked(random_chip(random));
        const ChipState state = chip_state(chip.model, chip.design.drive.current);
        if (!state.settled) continue;
        for (const EmitterState& emitter : state.emitters)
            CHECK(state.current * emitter.voltage == about(emitter.power + emitter.heat).epsilon(1e-9));
        if (mean_power(state) <= 0) continue;
        const Chip all = work_chip(chip.design, chip.array, chip.plan);
        CHECK(all.electrical_power == about(all.optical_power + all.heat).epsilon(1e-9));
    }
}

TEST_CASE("the chip against an independent slow solver on random arrays") {
    RandomStream random(12);
    int settled = 0;
    for (int i = 0; i < 200; ++i) {
        const Worked chip = worked(random_chip(random));
        const double current = chip.design.drive.current;
        const ChipState state = chip_state(chip.model, current);
        if (!state.settled) continue;
        ++settled;
        const SlowChip slow = slow_chip(chip, current);
        CAPTURE(i);
        const double sink = chip.model.sink_temperature;
        for (std::size_t k = 0; k < chip.array.size(); ++k) {
            const EmitterState& emitter = state.emitters[k];
            CHECK(emitter.average_temperature - sink == about(slow.average[k] - sink).epsilon(5e-3));
            CHECK(emitter.last_temperature - sink == about(slow.last[k] - sink).epsilon(5e-3));
        }
    }
    CHECK(settled > 150);
}

TEST_CASE("emitters of a long dwell warm each other within it, as the slow solver says") {
    // Rows of eight at 30 um, 1500 pulses of 20 ns every 0.5 us: 0.75 ms.
    Design design = grid(8, 8, 30e-6);
    design.emitters.addressing.scheme = AddressingScheme::rows;
    design.drive.current = 20e-3, design.drive.pulse_width = 20e-9;
    design.firing.shots = 1500, design.firing.repetition = 2e6, design.firing.gap = 20e-3;
    const Worked chip = worked(design);
    const ChipState state = chip_state(chip.model, design.drive.current);
    REQUIRE(state.settled);
    const SlowChip slow = slow_chip(chip, design.drive.current);
    for (std::size_t k = 0; k < chip.array.size(); ++k)
        CHECK(state.emitters[k].last_temperature - 298.15 == about(slow.last[k] - 298.15).epsilon(5e-3));
    // The neighbours matter: an inner emitter ends hotter than one at the end of its row by twice that
    // tolerance.
    const auto rise = [&](int k) { return state.emitters[k].last_temperature - 298.15; };
    CHECK(rise(3) > 1.01 * rise(0));
}

TEST_CASE("a single diode on all the time is the published example") {
    // Derived model of C. Wang et al. 2022 (10 um, 940 nm): 7.6463 mW at 8 mA and 315.63 K with 1961 K/W,
    // here by a substrate so thick that its own part is small.
    Design design = always_on(1, 1, 40e-6);
    design.emitters.diode = {.threshold = 0.9e-3, .slope = 1.17, .voltage = 1.55, .resistance = 65};
    design.emitters.heat.substrate_thickness = 5e-3;
    const Worked chip = worked(design);
    const ChipState state = chip_state(chip.model, 8e-3);
    CHECK(state.emitters[0].average_temperature == about(315.63).epsilon(2e-4));
    CHECK(mean_power(state) == about(7.6463e-3).epsilon(1e-3));
}

TEST_CASE("16 x 16 emitters at 40 um, all on: centre and corner") {
    // Derived with the same diode on a slab of 100 um: at 8 mA the centre reaches 326.1 K and 7.220 mW, the
    // corner 319.2 K and 7.503 mW, counted with the heat of the slab taken as 1030.8 and 363.4 K/W for equal
    // emitters, and a self resistance of 1961 K/W; the slab takes 24 K/W off that here.
    Design design = always_on(16, 16, 40e-6);
    design.emitters.diode = {.threshold = 0.9e-3, .slope = 1.17, .voltage = 1.55, .resistance = 65};
    const Worked chip = worked(design);
    const ChipState state = chip_state(chip.model, 8e-3);
    REQUIRE(state.settled);
    const EmitterState &centre = state.emitters[7 * 16 + 7], &corner = state.emitters[0];
    CHECK(centre.average_temperature == about(326.1).epsilon(2e-3));
    CHECK(corner.average_temperature == about(319.2).epsilon(2e-3));
    CHECK(centre.power == about(7.220e-3).epsilon(1e-2));
    CHECK(corner.power == about(7.503e-3).epsilon(1e-2));
}

TEST_CASE("more heat makes a chip hotter and dimmer") {
    const auto state_at = [](double pitch, double current) {
        const Worked chip = worked(always_on(6, 6, pitch));
        return chip_state(chip.model, current);
    };
    const ChipState wide = state_at(60e-6, 5e-3), narrow = state_at(25e-6, 5e-3);
    for (std::size_t i = 0; i < wide.emitters.size(); ++i) {
        CHECK(narrow.emitters[i].average_temperature > wide.emitters[i].average_temperature);
        CHECK(narrow.emitters[i].power < wide.emitters[i].power);
    }
    // Hot centre, cool corner.
    CHECK(narrow.emitters[14].average_temperature > narrow.emitters[0].average_temperature);
}

TEST_CASE("an asked power is met by the lowest current, or refused with the rollover") {
    Design design = always_on(4, 4, 40e-6);
    const Worked chip = worked(design);
    const ChipState met = chip_state_for_power(chip.model, 6e-3);
    CHECK(mean_power(met) == about(6e-3).epsilon(1e-8));
    for (const double share : {0.5, 0.8, 0.95})
        CHECK(mean_power(chip_state(chip.model, share * met.current)) < 6e-3);
    double largest = 0;
    for (double current = 1e-3; current < 40e-3; current *= 1.02)
        largest = std::max(largest, mean_power(chip_state(chip.model, current)));
    CHECK(mean_power(chip_state_for_power(chip.model, 0.999 * largest)) ==
          about(0.999 * largest).epsilon(1e-8));
    CHECK_THROWS_AS((void)chip_state_for_power(chip.model, 1.002 * largest), Error);
}

TEST_CASE("a hot chip drifts to longer wavelengths") {
    Design design = always_on(4, 4, 40e-6);
    const Worked chip = worked(design);
    const Chip all = work_chip(design, chip.array, chip.plan);
    const double hottest = all.zone_temperature[all.hottest_zone];
    CHECK(all.zone_wavelength[0] > 940e-9);
    // 0.07 nm/K (Seurin et al. 2011) of at most the hottest emitter.
    CHECK(all.zone_wavelength[0] - 940e-9 <= 0.07e-9 * (hottest - 298.15));
}

TEST_CASE("the brightest moment counts, also when a cold chip shines less") {
    // A threshold that is lowest at 360 K: cold diodes hardly shine, and light grows as they warm up.
    Design design = always_on(4, 4, 40e-6);
    design.emitters.diode.threshold_temperature = 360, design.emitters.diode.threshold_width = 60;
    design.emitters.heat.sink_temperature = 233;
    design.drive.current = 6e-3;
    const Worked chip = worked(design);
    const Chip all = work_chip(design, chip.array, chip.plan);
    for (const EmitterState& emitter : all.state.emitters)
        CHECK(emitter.brightest >= std::max({emitter.first_power, emitter.power, emitter.last_power}));
    CHECK(all.state.emitters[0].brightest >
          1.001 * operate(chip.model.diode.model, 6e-3, chip.model.sink_temperature).power);
    // In the usual case it is the cold start: brighter than the first pulse of a warm chip.
    const Worked usual = worked(always_on(4, 4, 40e-6));
    const ChipState warm = chip_state(usual.model, 8e-3);
    CHECK(warm.emitters[5].brightest ==
          about(operate(usual.model.diode.model, 8e-3, usual.model.sink_temperature).power).epsilon(1e-12));
    CHECK(warm.emitters[5].brightest > warm.emitters[5].first_power);
}

TEST_CASE("pulses of other shapes count by their energy") {
    Design design = grid(1, 1, 40e-6);
    const Worked chip = worked(design);
    design.drive.by = DriveBy::data_sheet, design.drive.peak_power = 1;
    design.drive.shape = PulseShape::half_sine;
    CHECK(light_up(design, chip.array, nullptr, &EmitterState::power).design.drive.peak_power ==
          about(3 / 3.14159265358979).epsilon(1e-9));
}

TEST_CASE("the heat and the light of a shaped pulse are those of its energy") {
    // Gaussian: 1.0645 times the width at half maximum (sqrt(pi / (4 ln 2))).
    Design design = grid(2, 2, 40e-6);
    const Worked rectangular = worked(design);
    design.drive.shape = PulseShape::gaussian;
    const Worked gaussian = worked(design);
    CHECK(gaussian.model.duty == about(1.0645 * rectangular.model.duty).epsilon(1e-4));
}
