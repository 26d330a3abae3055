// How long the eye-safety search takes: the aisle cart, individually addressed emitters, and its growth with
// emitters, zones and shots; and one image by the search and by brute force.
#include "safety/brute_force.h"

#include <glint/design/load.h>
#include <glint/emitter/array.h>
#include <glint/optics/far_field.h>
#include <glint/safety/eye_search.h>

#include <benchmark/benchmark.h>
#include <chrono>
#include <filesystem>

using namespace glint;

namespace {

// A module that the search works on.
struct Module {
    Design design;
    Beams beams;
    FarField field;
    TimePattern pattern;
};

Module module_of(const Design& design) {
    const EmitterArray array = build_array(design.emitters, field_sense(design.optics), {});
    Beams beams = project(array, design);
    FarField field = far_field(beams, Merge::no);
    const ExposureRules rules{LaserClass::class_1, design.emitters.wavelength, design.eye_safety.time_base};
    return {design, std::move(beams), std::move(field), time_pattern(plan_firing(design, array), rules)};
}

Design aisle_cart() {
    return load_design(std::filesystem::path(GLINT_SOURCE_DIR) / "examples/aisle-cart.xml").design;
}

// The aisle cart with other emitters, blocks and shots, on a chip of the same size, with the same average
// power and frame.
Design variant(int side, int blocks, int shots) {
    Design design = aisle_cart();
    Emitters& emitters = design.emitters;
    const double chip = 64 * emitters.layout.pitch;
    emitters.layout.rows = emitters.layout.columns = side;
    emitters.layout.pitch = emitters.layout.row_pitch.emplace(chip / side);
    emitters.addressing = {.scheme = AddressingScheme::blocks, .rows = blocks, .columns = blocks};
    design.drive.peak_power *= 64.0 * 64 / (side * side) * 140 * 256 / (shots * blocks * blocks);
    design.firing.shots = shots;
    design.firing.frame_period =
        std::max(65e-3, 1.01 * blocks * blocks * (shots / design.firing.repetition + design.firing.gap));
    return design;
}

EyeSearch search(const Module& module) {
    EyeSearch found;
    for (const Condition condition : {Condition::telescope, Condition::naked_eye})
        found =
            search_eyes({module.pattern, module.field, condition, module.design.eye_safety.closest_access},
                        std::move(found));
    return found;
}

void search_module(benchmark::State& state, const Design& design) {
    const Module module = module_of(design);
    EyeSearch found;
    for (auto _ : state) benchmark::DoNotOptimize(found = search(module));
    state.counters["places"] = static_cast<double>(found.work.places);
    state.counters["images"] = static_cast<double>(found.work.images);
    state.counters["ratio"] = found.bound();
}

void aisle_cart_search(benchmark::State& state) { search_module(state, aisle_cart()); }

void individual_search(benchmark::State& state) { search_module(state, variant(64, 64, 16)); }

void by_emitters(benchmark::State& state) {
    search_module(state, variant(static_cast<int>(state.range(0)), 8, 140));
}

void by_zones(benchmark::State& state) {
    search_module(state, variant(64, static_cast<int>(state.range(0)), 35));
}

void by_shots(benchmark::State& state) {
    search_module(state, variant(64, 16, static_cast<int>(state.range(0))));
}

// All foci at the worst place of an 8 x 8 array, by the search and by brute force: the time of one over the
// other.
void against_brute_force(benchmark::State& state) {
    using namespace glint::test;
    const Module module = module_of(variant(8, 4, static_cast<int>(state.range(0))));
    const EyeSearch found = search(module);
    const auto ratio = [](const EyeCase& each) { return each.part.worst.ratio; };
    const EyeCase& worst = *std::ranges::max_element(found.worst, {}, ratio);
    const std::array places{worst.eye.place};
    const BrutePlan plan =
        brute_plan(module.pattern.plan, module.pattern.rules.wavelength, module.pattern.rules.time_base);
    double slow = 0, fast = 0;
    const auto timed = [](double& sum, const auto& run) {
        const auto start = std::chrono::steady_clock::now();
        run();
        sum += std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
    };
    const EyeQuestion question{module.pattern, module.field, worst.condition};
    const std::vector<double> foci =
        vergences(entering_light(module.field, worst.eye, module.pattern.plan.pulse_width));
    for (auto _ : state) {
        timed(fast, [&] { benchmark::DoNotOptimize(search_eyes_at(question, places, {})); });
        timed(slow, [&] {
            for (const double vergence : foci) {
                const BruteEye eye{worst.eye.place, worst.eye.pupil_radius, vergence};
                benchmark::DoNotOptimize(
                    brute_force(plan, brute_image(module.beams, eye, module.pattern.plan.pulse_width)));
            }
        });
    }
    state.counters["slower"] = slow / fast;
}

}  // namespace

BENCHMARK(aisle_cart_search)->Unit(benchmark::kMillisecond)->UseRealTime();
BENCHMARK(individual_search)->Unit(benchmark::kMillisecond)->UseRealTime()->Iterations(1);
BENCHMARK(by_emitters)->Arg(8)->Arg(16)->Arg(32)->Arg(64)->Unit(benchmark::kMillisecond)->UseRealTime();
BENCHMARK(by_zones)->Arg(4)->Arg(8)->Arg(16)->Arg(32)->Unit(benchmark::kMillisecond)->UseRealTime();
BENCHMARK(by_shots)->Arg(4)->Arg(16)->Arg(64)->Arg(140)->Unit(benchmark::kMillisecond)->UseRealTime();
BENCHMARK(against_brute_force)->Arg(1)->Arg(4)->Arg(16)->Unit(benchmark::kMillisecond)->UseRealTime();
