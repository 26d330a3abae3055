// Drivers: lines and their loads, inductance, the discharged capacitor, pulse shapes.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/emitter/driver.h>

#include <doctest/doctest.h>
#include <algorithm>
#include <cmath>
#include <limits>

using namespace glint;

namespace {

// Whether a value rounds to a printed one whose last digit counts `unit`.
bool rounds_to(double value, double printed, double unit) {
    return std::abs(value - printed) <= 0.501 * unit;
}

Design chip(int rows, int columns, const Addressing& addressing, int zones_at_once = 1) {
    Design design;
    design.emitters.aperture = 5e-6;
    design.emitters.layout = {.kind = LayoutKind::grid, .rows = rows, .columns = columns, .pitch = 20e-6};
    design.emitters.addressing = addressing;
    design.drive = {.peak_power = 0.1, .pulse_width = 3e-9};
    design.firing = {.zones_at_once = zones_at_once, .repetition = 1e6};
    return design;
}

DriverCount count_of(const Design& design, int ends = 1) {
    return count_drivers(design.emitters.addressing.scheme,
                         build_array(design.emitters, FieldSense::upright, ""), ends);
}

DriverLoad load_of(const Design& design, double emitter_current) {
    const EmitterArray array = build_array(design.emitters, FieldSense::upright, "");
    return peak_load(design.emitters.addressing.scheme, array, plan_firing(design, array), emitter_current);
}

double between(RandomStream& random, double low, double high) {
    return low * std::pow(high / low, random.uniform());
}

// A series circuit of a charged capacitor, or of a steady supply (capacitance infinite), followed in time.
struct Circuit {
    DriveLoop loop;
    double capacitance, voltage, current = 0;

    [[nodiscard]] std::pair<double, double> rates(double v, double i) const {
        return {-i / capacitance, (v - loop.voltage - loop.resistance * i) / loop.inductance};
    }
    void step(double h) {  // Runge-Kutta of fourth order
        const auto [v1, i1] = rates(voltage, current);
        const auto [v2, i2] = rates(voltage + h / 2 * v1, current + h / 2 * i1);
        const auto [v3, i3] = rates(voltage + h / 2 * v2, current + h / 2 * i2);
        const auto [v4, i4] = rates(voltage + h * v3, current + h * i3);
        voltage += h / 6 * (v1 + 2 * v2 + 2 * v3 + v4);
        current += h / 6 * (i1 + 2 * i2 + 2 * i3 + i4);
    }
};

constexpr double endless = std::numeric_limits<double>::infinity();

}  // namespace

TEST_CASE("how many switches a chip of rows and columns needs") {
    // Derived counts: each emitter, whole rows, row and column lines.
    const Addressing individual{.scheme = AddressingScheme::individual},
        rows{.scheme = AddressingScheme::rows}, matrix{.scheme = AddressingScheme::matrix};
    CHECK(count_of(chip(16, 16, individual)).switches == 256);
    CHECK(count_of(chip(16, 16, rows)).switches == 16);
    CHECK(count_of(chip(16, 16, matrix)).switches == 32);
    CHECK(count_of(chip(32, 32, individual)).switches == 1024);
    CHECK(count_of(chip(32, 32, rows)).switches == 32);
    CHECK(count_of(chip(32, 32, matrix)).switches == 64);
    CHECK(count_of(chip(8, 8, individual)).pads == 64);  // Nahata, Murdocca 1996
}

TEST_CASE("channels, returns and pads of every scheme") {
    const auto check = [](const Addressing& addressing, int channels, int returns, int switches) {
        const DriverCount count = count_of(chip(6, 12, addressing), 2);
        CHECK(count.channels == channels);
        CHECK(count.returns == returns);
        CHECK(count.switches == switches);
        CHECK(count.pads == 2 * switches);
    };
    check({.scheme = AddressingScheme::individual}, 72, 1, 72);
    check({.scheme = AddressingScheme::rows, .rows = 3}, 3, 1, 3);
    check({.scheme = AddressingScheme::columns}, 12, 1, 12);
    check({.scheme = AddressingScheme::blocks, .rows = 2, .columns = 3}, 6, 1, 6);
    check({.scheme = AddressingScheme::interleaved, .rows = 2, .columns = 2}, 4, 1, 4);
    check({.scheme = AddressingScheme::matrix, .rows = 2, .columns = 4}, 4, 2, 6);
}

TEST_CASE("peak currents of lines by hand") {
    // Two blocks of 3 x 4 emitters at once.
    DriverLoad load =
        load_of(chip(6, 12, {.scheme = AddressingScheme::blocks, .rows = 2, .columns = 3}, 2), 50e-3);
    CHECK(load.emitters == 24);
    CHECK(load.channels == 2);
    CHECK(load.returns == 1);
    CHECK(load.channel_current == about(12 * 50e-3));
    CHECK(load.return_current == about(24 * 50e-3));
    CHECK(load.current == about(24 * 50e-3));
    // A matrix that fires a whole row of 12: each column feeds one emitter, the row takes all back.
    load = load_of(chip(6, 12, {.scheme = AddressingScheme::matrix}, 12), 50e-3);
    CHECK(load.channels == 12);
    CHECK(load.returns == 1);
    CHECK(load.channel_current == about(50e-3));
    CHECK(load.return_current == about(12 * 50e-3));
    // Two rows: each column feeds two, each row takes back its twelve.
    load = load_of(chip(6, 12, {.scheme = AddressingScheme::matrix}, 24), 50e-3);
    CHECK(load.returns == 2);
    CHECK(load.channel_current == about(2 * 50e-3));
    CHECK(load.return_current == about(12 * 50e-3));
    CHECK(load.current == about(24 * 50e-3));
    // Crossings of 2 x 3 emitters: a single one.
    load = load_of(chip(6, 12, {.scheme = AddressingScheme::matrix, .rows = 3, .columns = 4}), 50e-3);
    CHECK(load.channel_current == about(6 * 50e-3));
    CHECK(load.return_current == about(6 * 50e-3));
    // Zones of unequal size: the heaviest dwell counts, not the first.
    EmitterArray uneven{
        .positions = std::vector<Vec2>(6, Vec2::Zero()), .zone_of = {0, 1, 1, 1, 2, 2}, .zones = 3};
    const FiringPlan plan = plan_firing(chip(1, 1, {.scheme = AddressingScheme::list}), uneven);
    CHECK(peak_load(AddressingScheme::list, uneven, plan, 1).channel_current == 3);
}

TEST_CASE("what all lines feed, all returns take back") {
    for (const AddressingScheme scheme : {AddressingScheme::individual, AddressingScheme::matrix})
        for (const int at_once : {1, 2, 3, 4, 6, 12, 24, 36, 72}) {
            CAPTURE(at_once);
            const DriverLoad load = load_of(chip(6, 12, {.scheme = scheme}, at_once), 0.1);
            // Every emitter is a zone and every dwell is full, so all lines of a dwell carry the same.
            CHECK(load.channels * load.channel_current == about(load.current));
            CHECK(load.returns * load.return_current == about(load.current));
            CHECK(load.emitters == at_once);
        }
}

TEST_CASE("metal lines") {
    // Derived: gold, 1 mm x 20 um x 2 um.
    const double resistance = line_resistance(gold_resistivity, 1e-3, 20e-6, 2e-6);
    CHECK(rounds_to(resistance, 0.610, 1e-3));
    CHECK(rounds_to(line_drop(1, resistance), 0.305, 1e-3));
    // A ladder of n equal pieces, each feeding one emitter, comes to the even load as 1/n.
    const int n = 100000;
    double one_end = 0, both_ends = 0, most = 0;
    for (int piece = 0; piece < n; ++piece) {
        one_end += static_cast<double>(n - piece) / n * resistance / n;
        both_ends += (n / 2.0 - piece) / n * resistance / n;  // current turns around in the middle
        most = std::max(most, both_ends);
    }
    CHECK(line_drop(1, resistance) == about(one_end).epsilon(2.0 / n));
    CHECK(line_drop(1, resistance, 2) == about(most).epsilon(5.0 / n));
}

TEST_CASE("half-selected emitters of a matrix stay dark below the light of their junctions") {
    // 1.3 V a junction is from memory.
    CHECK(half_selected(2.5, MatrixBias::half, 1).dark());
    CHECK(!half_selected(2.7, MatrixBias::half, 1).dark());
    CHECK(half_selected(2.7, MatrixBias::third, 1).dark());
    CHECK(half_selected(9.72, MatrixBias::half, 3).voltage == about(4.86));
    CHECK(half_selected(9.72, MatrixBias::third, 3).limit == about(3.9));
}

TEST_CASE("voltage to ramp a current through an inductance") {
    // Derived: nH, A, ns, V.
    CHECK(ramp_voltage({.inductance = 1e-9}, 10, 1e-9) == about(10));
    CHECK(ramp_voltage({.inductance = 0.5e-9}, 20, 1e-9) == about(10));
    CHECK(ramp_voltage({.inductance = 2e-9}, 40, 2e-9) == about(40));
    CHECK(*ramp_time({.inductance = 1e-9, .voltage = 5}, 20, 30) == about(0.80e-9));
    // 120 W at 3.2 W/A through 1 nH in half of 1.8 ns: powers of a 940 nm array, c. 2025; voltage derived.
    CHECK(rounds_to(ramp_voltage({.inductance = 1e-9}, 120 / 3.2, 0.9e-9), 41.7, 0.1));
    // Derived: strips over a plane.
    CHECK(rounds_to(plate_inductance(100e-6, 5e-3, 2e-3) * 1e9, 0.314, 1e-3));
    CHECK(rounds_to(plate_inductance(50e-6, 3e-3, 3e-3) * 1e9, 0.063, 1e-3));
    // Derived: 20 A for 3 ns take 60 nC, 0.6 V of 100 nF.
    CHECK(droop(20, 3e-9, 100e-9) == about(0.6));
    CHECK(storage_capacitance(20, 3e-9, 0.6) == about(100e-9));
    CHECK(!ramp_time({.inductance = 1e-9, .resistance = 1, .voltage = 5}, 20, 25));
}

TEST_CASE("ramp time and voltage invert each other, and a real loop is never slower") {
    RandomStream random(1);
    for (int trial = 0; trial < 200; ++trial) {
        const DriveLoop loop{.inductance = between(random, 0.1e-9, 5e-9),
                             .resistance = trial % 4 == 0 ? 0 : between(random, 0.01, 1),
                             .voltage = between(random, 1, 20)};
        const double current = between(random, 1, 50), time = between(random, 0.1e-9, 5e-9);
        CAPTURE(trial);
        const double supply = ramp_voltage(loop, current, time);
        CHECK(*ramp_time(loop, current, supply) == about(time).epsilon(1e-10));
        Circuit circuit{.loop = loop, .capacitance = endless, .voltage = supply};
        for (int i = 0; i < 1000; ++i) circuit.step(time / 1000);
        CHECK(circuit.current >= current * (1 - 1e-9));
        if (loop.resistance == 0) CHECK(circuit.current == about(current).epsilon(1e-9));
    }
}

TEST_CASE("a capacitor discharged into a loop, line by line") {
    // Derived: nH, nF, ohm, A, ns, ns, nC, ns, damping; all with 32 V above the emitters.
    const struct {
        double inductance, capacitance, resistance, peak, base, fwhm, charge, rise, damping;
    } rows[] = {{1, 1, 0, 32.000, 3.142, 2.094, 64.00, 1.020, 0},
                {1, 1, 0.3, 25.797, 3.178, 2.102, 51.87, 0.914, 0.150},
                {1, 1, 0.6, 21.490, 3.293, 2.124, 43.91, 0.827, 0.300},
                {0.5, 2, 0.2, 48.393, 3.206, 2.107, 97.70, 0.883, 0.200},
                {2, 0.5, 0.3, 14.298, 3.150, 2.096, 28.63, 0.964, 0.075}};
    for (const auto& row : rows) {
        CAPTURE(row.inductance);
        CAPTURE(row.resistance);
        const Discharge found =
            discharge({.inductance = row.inductance * 1e-9, .resistance = row.resistance, .voltage = 8},
                      row.capacitance * 1e-9, 40);
        CHECK(rounds_to(found.peak, row.peak, 1e-3));
        CHECK(rounds_to(found.base * 1e9, row.base, 1e-3));
        CHECK(rounds_to(found.fwhm * 1e9, row.fwhm, 1e-3));
        CHECK(rounds_to(found.charge * 1e9, row.charge, 0.01));
        CHECK(rounds_to(found.rise_time * 1e9, row.rise, 1e-3));
        CHECK(rounds_to(found.damping, row.damping, 1e-3));
    }
}

TEST_CASE("an undamped discharge in closed form") {
    const DriveLoop loop{.inductance = 0.7e-9, .voltage = 8};
    const double c = 1.3e-9;
    const Discharge found = discharge(loop, c, 40);
    CHECK(found.peak == about(32 * std::sqrt(c / 0.7e-9)).epsilon(1e-12));
    CHECK(found.base == about(pi * std::sqrt(0.7e-9 * c)).epsilon(1e-12));
    CHECK(found.fwhm == about(found.base * 2 / 3).epsilon(1e-12));
    CHECK(found.end_voltage == about(2 * 8 - 40).epsilon(1e-12));
    CHECK(found.supply_energy == about(2 * c * 40 * 32).epsilon(1e-12));
    CHECK(found.supply_energy_clamped == about(c * 40 * 40).epsilon(1e-12));
    CHECK(found.rise_time == about(rise_time(PulseShape::half_sine, found.fwhm)).epsilon(1e-12));
    CHECK(found.charge ==
          about(found.peak * equivalent_width(PulseShape::half_sine, found.fwhm)).epsilon(1e-12));
    // Emitters that take more than half of the voltage leave the capacitor above 0: nothing to clamp.
    const Discharge weak = discharge(loop, c, 12);
    CHECK(weak.end_voltage == about(4).epsilon(1e-12));
    CHECK(weak.supply_energy_clamped == weak.supply_energy);
}

TEST_CASE("a circuit followed in time discharges as the closed form says") {
    RandomStream random(2);
    for (int trial = 0; trial < 100; ++trial) {
        const double capacitance = between(random, 0.1e-9, 10e-9), start = between(random, 10, 100);
        DriveLoop loop{.inductance = between(random, 0.1e-9, 5e-9),
                       .voltage = start * random.uniform() * 0.9};
        loop.resistance = 2 * 0.95 * random.uniform() * std::sqrt(loop.inductance / capacitance);
        CAPTURE(trial);
        const Discharge expected = discharge(loop, capacitance, start);
        Circuit circuit{.loop = loop, .capacitance = capacitance, .voltage = start};
        // Straight lines between steps miss a crossing by (steps)^-2 of the pulse, some 1e-7.
        const int steps = 4000;
        const double h = expected.base / steps;
        double peak = 0, tenth = 0, ninety = 0, rise_half = 0, fall_half = 0, end = 0;
        for (int i = 0; i < steps + 10 && end == 0; ++i) {
            const double before = circuit.current;
            circuit.step(h);
            const auto crossing = [&](double level) {
                return h * (i + (level - before) / (circuit.current - before));
            };
            const auto passed = [&](double level) { return (before < level) != (circuit.current < level); };
            if (passed(0.1 * expected.peak) && tenth == 0) tenth = crossing(0.1 * expected.peak);
            if (passed(0.9 * expected.peak) && ninety == 0) ninety = crossing(0.9 * expected.peak);
            if (passed(0.5 * expected.peak))
                (rise_half == 0 ? rise_half : fall_half) = crossing(0.5 * expected.peak);
            if (i > 0 && passed(0)) end = crossing(0);
            peak = std::max(peak, circuit.current);
        }
        CHECK(peak == about(expected.peak).epsilon(1e-6));
        CHECK(end == about(expected.base).epsilon(1e-5));
        CHECK(fall_half - rise_half == about(expected.fwhm).epsilon(1e-5));
        CHECK(ninety - tenth == about(expected.rise_time).epsilon(1e-5));
        // The voltage is at its turning point there, where steps do not matter.
        CHECK(std::abs(circuit.voltage - expected.end_voltage) < 1e-5 * start);
        CHECK(expected.charge == about(capacitance * (start - circuit.voltage)).epsilon(1e-5));
        CHECK(expected.supply_energy == about(start * expected.charge).epsilon(1e-12));
    }
}

TEST_CASE("a capacitor found for a pulse gives that pulse") {
    RandomStream random(3);
    for (int trial = 0; trial < 200; ++trial) {
        DriveLoop loop{.inductance = between(random, 0.1e-9, 5e-9), .voltage = between(random, 1, 20)};
        const double fwhm = between(random, 0.5e-9, 20e-9), peak = between(random, 1, 100);
        // Damping near FWHM R / (4.9 L), up to just below 1.
        if (trial % 4 != 0) loop.resistance = random.uniform() * 2 * 2.446 * loop.inductance / fwhm;
        CAPTURE(trial);
        const ChargedCapacitor found = capacitor_for(loop, fwhm, peak).value();
        const Discharge pulse = discharge(loop, found.capacitance, found.voltage);
        CHECK(pulse.fwhm == about(fwhm).epsilon(1e-10));
        CHECK(pulse.peak == about(peak).epsilon(1e-10));
    }
    // Without resistance: the textbook's inverse.
    const ChargedCapacitor found = capacitor_for({.inductance = 1e-9, .voltage = 8}, 2e-9, 20).value();
    CHECK(found.capacitance == about(std::pow(3e-9 / pi, 2) / 1e-9).epsilon(1e-12));
    CHECK(found.voltage == about(8 + 20 * std::sqrt(1e-9 / found.capacitance)).epsilon(1e-12));
}

TEST_CASE("width and rise of pulse shapes against their curves") {
    const auto gauss = [](double t) { return std::exp(-4 * std::log(2.0) * t * t); };
    const auto half_sine = [](double t) { return std::abs(t) < 0.75 ? std::cos(pi * t / 1.5) : 0.0; };
    const auto area_and_rise = [](auto curve) {
        double area = 0, tenth = 0, ninety = 0;
        const int steps = 300000;
        for (int i = 0; i < steps; ++i) {
            const double t = -3 + 6 * (i + 0.5) / steps;
            area += curve(t) * 6 / steps;
            if (t < 0 && curve(t) < 0.1) tenth = t;
            if (t < 0 && curve(t) < 0.9) ninety = t;
        }
        return std::pair(area, ninety - tenth);
    };
    // The midpoint rule errs by some 1e-9 here, places on the curve by a step of 2e-5.
    const auto check = [](PulseShape shape, const std::pair<double, double>& expected) {
        CHECK(equivalent_width(shape, 2e-9) == about(2e-9 * expected.first).epsilon(1e-7));
        CHECK(rise_time(shape, 2e-9) == about(2e-9 * expected.second).epsilon(1e-4));
    };
    check(PulseShape::gaussian, area_and_rise(gauss));
    check(PulseShape::half_sine, area_and_rise(half_sine));
    CHECK(half_sine(0.5) == about(0.5));
    CHECK(equivalent_width(PulseShape::rectangular, 2e-9) == 2e-9);
    CHECK(rise_time(PulseShape::rectangular, 2e-9) == 0);
}

TEST_CASE("bad drivers are refused, all faults at once") {
    const DriveLoop loop{.inductance = 1e-9, .resistance = 0.3, .voltage = 8};
    CHECK_THROWS_WITH_AS((void)discharge({.inductance = 0, .resistance = -1}, 1e-9, 40),
                         "driver/inductance: 0 is out of range; accepted: above 0\n"
                         "driver/resistance: -1 is out of range; accepted: 0 or more",
                         Error);
    CHECK_THROWS_WITH_AS((void)discharge(loop, 1e-9, 8),
                         "driver/start_voltage: 8 V drive no current through emitters that take 8 V; "
                         "accepted: more than the emitters take",
                         Error);
    CHECK_THROWS_WITH_AS((void)discharge(loop, 100e-9, 40),
                         "driver/resistance: a loop damped to 1.5 has no half wave; accepted: below 0.2 ohm",
                         Error);
    // 2.446386 times 2 L/R, the width of the critically damped pulse: 16.31 ns.
    CHECK(capacitor_for(loop, 16.30e-9, 10));
    CHECK(!capacitor_for(loop, 16.32e-9, 10));
    CHECK_THROWS_WITH_AS((void)line_drop(1, 1, 3), "driver/ends: a line with 3 fed ends; accepted: 1 or 2",
                         Error);
    CHECK_THROWS_AS((void)ramp_voltage(loop, std::numeric_limits<double>::quiet_NaN(), 1e-9), Error);
    CHECK_THROWS_AS((void)ramp_voltage(loop, 1, 0), Error);
    CHECK_THROWS_AS((void)line_resistance(gold_resistivity, 1e-3, 0, 2e-6), Error);
    CHECK_THROWS_AS((void)plate_inductance(1e-4, endless, 1e-3), Error);
    CHECK_THROWS_AS((void)half_selected(3, MatrixBias::half, 0), Error);
    CHECK_THROWS_AS((void)equivalent_width(PulseShape::gaussian, 0), Error);
    CHECK_THROWS_AS((void)load_of(chip(2, 2, {.scheme = AddressingScheme::rows}), -1), Error);
}
