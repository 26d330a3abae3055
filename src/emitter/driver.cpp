// What drives the emitters: lines and their loads, the loop's inductance, the capacitor that is discharged.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/emitter/driver.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>
#include <initializer_list>
#include <numeric>
#include <string>
#include <utility>
#include <vector>

namespace glint {
namespace {

constexpr double vacuum_permeability = 4e-7 * pi;  // H/m, to 2e-10 (SI since 2019)

struct Argument {
    double value;
    const char* name;
};

void refuse(const std::string& what, const char* name, std::string accepted) {
    throw Error(
        Problem{.what = what, .accepted = std::move(accepted), .path = fmt::format("driver/{}", name)});
}

// NaN and infinity are in no range.
void check(std::initializer_list<Argument> above_zero, std::initializer_list<Argument> not_negative = {}) {
    std::vector<Problem> problems;
    const auto demand = [&](bool met, const Argument& argument, const char* accepted) {
        if (!met || !std::isfinite(argument.value))
            problems.push_back({.what = fmt::format("{} is out of range", argument.value),
                                .accepted = accepted,
                                .path = fmt::format("driver/{}", argument.name)});
    };
    for (const Argument& argument : above_zero) demand(argument.value > 0, argument, "above 0");
    for (const Argument& argument : not_negative) demand(argument.value >= 0, argument, "0 or more");
    if (!problems.empty()) throw Error(std::move(problems));
}

void check(const DriveLoop& loop) {
    check({{loop.inductance, "inductance"}}, {{loop.resistance, "resistance"}, {loop.voltage, "voltage"}});
}

void check_ends(int ends) {
    if (ends != 1 && ends != 2) refuse(fmt::format("a line with {} fed ends", ends), "ends", "1 or 2");
}

int largest(const std::vector<int>& counts) { return *std::ranges::max_element(counts); }

int used(const std::vector<int>& counts) {
    return static_cast<int>(counts.size() - std::ranges::count(counts, 0));
}

// The half wave i = exp(-decay t) sin(turn t) / turn, in units of V/L.
struct HalfWave {
    double decay, turn;

    [[nodiscard]] double at(double t) const { return std::exp(-decay * t) * std::sin(turn * t) / turn; }
    [[nodiscard]] double base() const { return pi / turn; }
    [[nodiscard]] double peak_time() const { return std::atan2(turn, decay) / turn; }
    // When it passes `share` of its peak on the way up (from = 0) or down (from = base).
    [[nodiscard]] double passes(double share, double from) const {
        double below = from, above = peak_time();
        const double level = share * at(above);
        for (int i = 0; i < 60; ++i) {
            const double middle = (below + above) / 2;
            (at(middle) < level ? below : above) = middle;
        }
        return above;
    }
    [[nodiscard]] double fwhm() const { return passes(0.5, base()) - passes(0.5, 0); }
};

double damping_of(const DriveLoop& loop, double capacitance) {
    return loop.resistance / 2 * std::sqrt(capacitance / loop.inductance);
}

HalfWave half_wave(const DriveLoop& loop, double capacitance) {
    const double damping = damping_of(loop, capacitance);
    return {.decay = loop.resistance / (2 * loop.inductance),
            .turn = std::sqrt((1 - damping) * (1 + damping) / (loop.inductance * capacitance))};
}

}  // namespace

DriverCount count_drivers(AddressingScheme scheme, const EmitterArray& array, int ends) {
    check_ends(ends);
    DriverCount count;
    if (scheme == AddressingScheme::matrix) {
        count = {.channels = array.zone_columns, .returns = array.zone_rows};
        count.switches = count.channels + count.returns;
    } else {
        count = {.channels = array.zones, .returns = 1, .switches = array.zones};
    }
    count.pads = count.switches * ends;
    return count;
}

DriverLoad peak_load(AddressingScheme scheme, const EmitterArray& array, const FiringPlan& plan,
                     double emitter_current) {
    check({}, {{emitter_current, "emitter_current"}});
    const DriverCount lines = count_drivers(scheme, array);
    const bool matrix = scheme == AddressingScheme::matrix;
    const ZoneMembers members = members_of(array);
    DriverLoad load;
    for (int dwell = 0; dwell < plan.dwells(); ++dwell) {
        std::vector<int> fed(static_cast<std::size_t>(lines.channels), 0);  // emitters on each line
        std::vector<int> returned(static_cast<std::size_t>(lines.returns), 0);
        for (const int zone : plan.zones_of(dwell)) {
            fed[matrix ? zone % array.zone_columns : zone] += members.count(zone);
            returned[matrix ? zone / array.zone_columns : 0] += members.count(zone);
        }
        const int emitters = std::accumulate(fed.begin(), fed.end(), 0);
        load.emitters = std::max(load.emitters, emitters);
        load.channels = std::max(load.channels, used(fed));
        load.returns = std::max(load.returns, used(returned));
        load.channel_current = std::max(load.channel_current, largest(fed) * emitter_current);
        load.return_current = std::max(load.return_current, largest(returned) * emitter_current);
    }
    load.current = load.emitters * emitter_current;
    return load;
}

double line_resistance(double resistivity, double length, double width, double thickness) {
    check({{resistivity, "resistivity"}, {length, "length"}, {width, "width"}, {thickness, "thickness"}});
    return resistivity * length / (width * thickness);
}

double line_drop(double current, double resistance, int ends) {
    check({}, {{current, "current"}, {resistance, "resistance"}});
    check_ends(ends);
    // The current left at x of a line of length 1 is I (1 - x): its drop sums up to I R / 2. Fed at both
    // ends, each half line carries half of the current: (I/2) (R/2) / 2.
    return ends == 1 ? current * resistance / 2 : current * resistance / 8;
}

HalfSelected half_selected(double emitter_voltage, MatrixBias bias, int junctions) {
    check({{static_cast<double>(junctions), "junctions"}}, {{emitter_voltage, "voltage"}});
    return {.voltage = emitter_voltage / (bias == MatrixBias::half ? 2 : 3), .limit = 1.3 * junctions};
}

double plate_inductance(double height, double length, double width) {
    check({{height, "height"}, {length, "length"}, {width, "width"}});
    return vacuum_permeability * height * length / width;
}

double ramp_voltage(const DriveLoop& loop, double current, double rise_time) {
    check(loop);
    check({{rise_time, "rise_time"}}, {{current, "current"}});
    return loop.voltage + current * loop.resistance + loop.inductance * current / rise_time;
}

std::optional<double> ramp_time(const DriveLoop& loop, double current, double supply) {
    check(loop);
    check({}, {{current, "current"}, {supply, "supply"}});
    const double left = supply - loop.voltage - current * loop.resistance;
    if (left <= 0) return std::nullopt;
    return loop.inductance * current / left;
}

double droop(double current, double pulse_width, double capacitance) {
    check({{capacitance, "capacitance"}}, {{current, "current"}, {pulse_width, "pulse_width"}});
    return current * pulse_width / capacitance;
}

double storage_capacitance(double current, double pulse_width, double droop) {
    check({{droop, "droop"}}, {{current, "current"}, {pulse_width, "pulse_width"}});
    return current * pulse_width / droop;
}

Discharge discharge(const DriveLoop& loop, double capacitance, double start_voltage) {
    check(loop);
    check({{capacitance, "capacitance"}, {start_voltage, "start_voltage"}});
    const double net = start_voltage - loop.voltage;
    if (net <= 0)
        refuse(fmt::format("{:.4g} V drive no current through emitters that take {:.4g} V", start_voltage,
                           loop.voltage),
               "start_voltage", "more than the emitters take");
    const double damping = damping_of(loop, capacitance);
    if (damping >= 1)
        refuse(fmt::format("a loop damped to {:.3g} has no half wave", damping), "resistance",
               fmt::format("below {:.4g} ohm", 2 * std::sqrt(loop.inductance / capacitance)));
    const HalfWave wave = half_wave(loop, capacitance);
    // After half a turn the capacitor stands at the mirror image of its net voltage, less what was damped.
    const double kept = std::exp(-wave.decay * wave.base());
    const double end_voltage = loop.voltage - net * kept;
    return {
        .peak = net / loop.inductance * wave.at(wave.peak_time()),
        .peak_time = wave.peak_time(),
        .base = wave.base(),
        .fwhm = wave.fwhm(),
        .rise_time = wave.passes(0.9, 0) - wave.passes(0.1, 0),
        .charge = capacitance * net * (1 + kept),
        .damping = damping,
        .end_voltage = end_voltage,
        .supply_energy = start_voltage * capacitance * (start_voltage - end_voltage),
        .supply_energy_clamped = start_voltage * capacitance * (start_voltage - std::max(0.0, end_voltage))};
}

std::optional<ChargedCapacitor> capacitor_for(const DriveLoop& loop, double fwhm, double peak) {
    check(loop);
    check({{fwhm, "fwhm"}, {peak, "peak"}});
    const double root = 1.5 * fwhm / pi;
    double high = root * root / loop.inductance;  // damping makes the pulse of a capacitor longer
    double low = high;
    if (loop.resistance > 0) {
        // FWHM of the critically damped pulse t exp(-t/tau), tau = 2 L / R: 2.446386 tau, the distance of the
        // two roots of x exp(1 - x) = 1/2.
        const double longest = 2.446386037 * 2 * loop.inductance / loop.resistance;
        if (fwhm >= longest * (1 - 1e-6)) return std::nullopt;
        low = 0;
        high = std::min(high, 4 * loop.inductance / (loop.resistance * loop.resistance));
        for (int i = 0; i < 60; ++i) {
            const double middle = (low + high) / 2;
            (half_wave(loop, middle).fwhm() < fwhm ? low : high) = middle;
        }
    }
    const double capacitance = (low + high) / 2;
    const HalfWave wave = half_wave(loop, capacitance);
    return ChargedCapacitor{.capacitance = capacitance,
                            .voltage = loop.voltage + peak * loop.inductance / wave.at(wave.peak_time())};
}

double equivalent_width(PulseShape shape, double fwhm) {
    check({{fwhm, "fwhm"}});
    switch (shape) {
        case PulseShape::rectangular:
            return fwhm;
        case PulseShape::half_sine:  // above one half from 30 to 150 degrees: base 1.5 FWHM, mean 2/pi
            return 3 / pi * fwhm;
        case PulseShape::gaussian:  // exp(-4 ln 2 (t / FWHM)^2)
            return std::sqrt(pi / (4 * std::log(2.0))) * fwhm;
    }
    return 0;
}

double rise_time(PulseShape shape, double fwhm) {
    check({{fwhm, "fwhm"}});
    switch (shape) {
        case PulseShape::rectangular:
            return 0;
        case PulseShape::half_sine:
            return 1.5 * fwhm / pi * (std::asin(0.9) - std::asin(0.1));
        case PulseShape::gaussian:
            return fwhm / 2 * (std::sqrt(std::log2(10.0)) - std::sqrt(std::log2(1 / 0.9)));
    }
    return 0;
}

}  // namespace glint
