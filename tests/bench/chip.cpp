// How long the balance of light and heat of a whole chip takes.
#include <glint/emitter/chip.h>

#include <benchmark/benchmark.h>

using namespace glint;

namespace {

// Emitters in a square of 40 um pitch, addressed by rows.
Design design_of(int side, LayoutKind kind) {
    Design design;
    design.emitters.wavelength = 940e-9, design.emitters.aperture = 10e-6;
    design.emitters.layout = {.kind = kind, .rows = side, .columns = side, .pitch = 40e-6};
    design.emitters.addressing.scheme = AddressingScheme::rows;
    design.drive = {.by = DriveBy::current, .current = 20e-3, .pulse_width = 3e-9};
    design.firing = {.shots = 100, .repetition = 500e3};
    return design;
}

void chip(benchmark::State& state, DriveBy by, LayoutKind kind) {
    Design design = design_of(static_cast<int>(state.range(0)), kind);
    design.drive.by = by, design.drive.peak_power = 15e-3;
    const EmitterArray array = build_array(design.emitters, FieldSense::upright, {});
    const FiringPlan plan = plan_firing(design, array);
    Chip worked = work_chip(design, array, plan);
    for (auto _ : state) benchmark::DoNotOptimize(worked = work_chip(design, array, plan));
    state.counters["rounds"] = worked.state.iterations;
}

void by_current_on_a_grid(benchmark::State& state) { chip(state, DriveBy::current, LayoutKind::grid); }
void by_current_hexagonal(benchmark::State& state) { chip(state, DriveBy::current, LayoutKind::hexagonal); }
void by_power_on_a_grid(benchmark::State& state) { chip(state, DriveBy::power, LayoutKind::grid); }

}  // namespace

BENCHMARK(by_current_on_a_grid)
    ->Arg(16)
    ->Arg(32)
    ->Arg(64)
    ->Arg(128)
    ->Unit(benchmark::kMillisecond)
    ->UseRealTime();
BENCHMARK(by_current_hexagonal)->Arg(128)->Unit(benchmark::kMillisecond)->UseRealTime();
BENCHMARK(by_power_on_a_grid)
    ->Arg(16)
    ->Arg(32)
    ->Arg(64)
    ->Arg(128)
    ->Unit(benchmark::kMillisecond)
    ->UseRealTime();
