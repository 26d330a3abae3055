// The light-current-voltage model of one surface-emitting laser diode, with thermal rollover.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/emitter/diode.h>

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <cmath>
#include <initializer_list>
#include <string>
#include <utility>
#include <vector>

namespace glint {
namespace {

constexpr double elementary_charge = 1.602176634e-19;  // C, exact (SI)

// Gathers every number out of range, so that one error tells all. NaN is in no range.
struct Checked {
    std::vector<Problem> problems;

    void demand(bool met, double value, const char* name, std::string accepted) {
        if (!met || !std::isfinite(value))
            problems.push_back({.what = fmt::format("{} is out of range", value),
                                .accepted = std::move(accepted),
                                .path = fmt::format("diode/{}", name)});
    }
    void above_zero(double value, const char* name) { demand(value > 0, value, name, "above 0"); }
    void done() {
        if (!problems.empty()) throw Error(std::move(problems));
    }
};

double zero_slope(const DiodeModel& m) { return m.reference + m.slope_fall; }

double slope_at(const DiodeModel& m, double temperature) {
    return m.slope * std::max(0.0, (zero_slope(m) - temperature) / m.slope_fall);
}

double voltage_at_zero(const DiodeModel& m, double temperature) {
    return m.voltage + m.voltage_per_kelvin * (temperature - m.reference);
}

Operation unchecked(const DiodeModel& m, double current, double temperature) {
    const double detuning = (temperature - m.threshold_best_temperature) / m.threshold_width;
    Operation at{.current = current, .temperature = temperature};
    at.threshold = m.threshold * (1 + detuning * detuning);
    at.slope = slope_at(m, temperature);
    at.voltage = voltage_at_zero(m, temperature) + current * m.resistance;
    at.power = std::max(0.0, at.slope * (current - at.threshold));
    at.heat = current * at.voltage - at.power;
    return at;
}

struct Argument {
    double value;
    const char* name;
};

// The model, a temperature and arguments that must not be negative.
void check(const DiodeModel& m, double temperature, std::initializer_list<Argument> arguments) {
    Checked checked;
    checked.demand(m.junctions >= 1, m.junctions, "junctions", "1 or more");
    checked.above_zero(m.threshold, "threshold");
    checked.above_zero(m.threshold_best_temperature, "threshold_best_temperature");
    checked.above_zero(m.threshold_width, "threshold_width");
    checked.above_zero(m.slope, "slope");
    checked.above_zero(m.slope_fall, "slope_fall");
    checked.above_zero(m.voltage, "voltage");
    checked.demand(m.resistance >= 0, m.resistance, "resistance", "0 or more");
    checked.above_zero(m.reference, "reference");
    checked.demand(temperature > 0 && temperature <= runaway_temperature, temperature, "temperature",
                   fmt::format("above 0, up to {} K", runaway_temperature));
    for (const auto& [value, name] : arguments) checked.demand(value >= 0, value, name, "0 or more");
    checked.done();
    // The slope is convex in T and the voltage straight, so what holds at both ends holds between them. That
    // no slope is above the voltage makes heat positive and rising with current, which all searches rest on.
    for (const double t : {temperature, runaway_temperature})
        if (const double slope = slope_at(m, t), voltage = voltage_at_zero(m, t);
            !(voltage > 0 && slope <= voltage))
            throw Error(Problem{
                .what = fmt::format("at {:.4g} K a slope of {:.4g} W/A meets a voltage of {:.4g} V", t, slope,
                                    voltage),
                .accepted =
                    "a voltage above 0 and not below the slope, or light would exceed electrical power",
                .path = "diode/slope"});
}

// f(T) = T - base - R Q(T) is a polynomial of third degree at most between the temperatures where light ends.
// With x = T - Tbest, A = Ith0/width^2, B = I - Ith0, c = Tzero - Tbest the light is
//     P = (slope/fall) (c - x) (B - A x^2), so
//     f' = 1 - R I dV/dT + R (slope/fall) (3 A x^2 - 2 A c x - B).
// Those ends and the roots of f' cut the axis into pieces on which f is monotone, so the first piece that
// ends above 0 holds the lowest root, and it alone. No search step can miss it.
std::vector<double> monotone_pieces(const DiodeModel& m, double current, double base, double resistance) {
    const double best = m.threshold_best_temperature;
    const double a = m.threshold / (m.threshold_width * m.threshold_width), b = current - m.threshold;
    std::vector<double> ends{zero_slope(m), runaway_temperature};
    if (b > 0) {
        const double reach = std::sqrt(b / a), c = zero_slope(m) - best;
        ends.insert(ends.end(), {best - reach, best + reach});
        const double gain = resistance * m.slope / m.slope_fall;
        const double rest = 1 - resistance * current * m.voltage_per_kelvin - gain * b;
        const double discriminant = a * c * a * c - 3 * a * rest / gain;  // of 3 a x^2 - 2 a c x + rest/gain
        if (discriminant > 0) {
            const double root = std::sqrt(discriminant);
            ends.insert(ends.end(), {best + (a * c - root) / (3 * a), best + (a * c + root) / (3 * a)});
        }
    }
    std::erase_if(ends, [&](double t) { return !(t > base && t <= runaway_temperature); });
    std::ranges::sort(ends);
    return ends;
}

Steady settle(const DiodeModel& m, double current, double base, double resistance) {
    const auto excess = [&](double t) { return t - base - resistance * unchecked(m, current, t).heat; };
    double low = base;
    if (excess(base) >= 0) return {.at = unchecked(m, current, base)};  // no heat, or no resistance
    for (const double end : monotone_pieces(m, current, base, resistance)) {
        if (!(excess(end) >= 0)) {  // an overflow settles nowhere
            low = end;
            continue;
        }
        double high = end;
        // 52 halvings of less than 1000 K leave less than 1e-12 K.
        for (int i = 0; i < 52; ++i) {
            const double middle = (low + high) / 2;
            (excess(middle) < 0 ? low : high) = middle;
        }
        return {.at = unchecked(m, current, high)};
    }
    return {.at = unchecked(m, current, runaway_temperature), .runaway = true};
}

// The lowest root never falls when current grows: currents that settle with a slope left are one range.
double highest_current(const DiodeModel& m, double base, double resistance) {
    const auto has_slope = [&](double current) {
        const Steady s = settle(m, current, base, resistance);
        return !s.runaway && s.at.slope > 0;
    };
    if (!has_slope(m.threshold)) return m.threshold;
    double low = m.threshold, high = 2 * m.threshold;
    while (has_slope(high)) low = high, high *= 2;
    for (int i = 0; i < 52; ++i) {
        const double middle = (low + high) / 2;
        (has_slope(middle) ? low : high) = middle;
    }
    return low;
}

// Currents from the lowest threshold to `last` in equal ratios: the scans see every feature that is wider.
constexpr int steps = 160;
double rung(const DiodeModel& m, double last, int i) {
    return i == steps ? last : m.threshold * std::pow(last / m.threshold, static_cast<double>(i) / steps);
}

// The largest `merit` of an operation: a scan finds its bracket, golden sections close it.
template <typename Merit>
Operation best_of(const DiodeModel& m, double base, double resistance, const Merit& merit) {
    const double last = highest_current(m, base, resistance);
    const auto at = [&](double current) { return settle(m, current, base, resistance).at; };
    const auto value = [&](double current) { return merit(at(current)); };
    int best = 0;
    double top = 0;
    for (int i = 0; i <= steps; ++i)
        if (const double v = value(rung(m, last, i)); v > top) top = v, best = i;
    if (top == 0) return unchecked(m, 0, base);
    double low = rung(m, last, std::max(best - 1, 0)), high = rung(m, last, std::min(best + 1, steps));
    const double golden = (std::sqrt(5.0) - 1) / 2;
    double left = high - golden * (high - low), right = low + golden * (high - low);
    double at_left = value(left), at_right = value(right);
    for (int i = 0; i < 60; ++i) {  // 0.618^60 = 3e-13, well below what a flat top resolves
        if (at_left >= at_right) {
            high = right, right = left, at_right = at_left;
            left = high - golden * (high - low), at_left = value(left);
        } else {
            low = left, left = right, at_left = at_right;
            right = low + golden * (high - low), at_right = value(right);
        }
    }
    return at(at_left >= at_right ? left : right);
}

Operation largest_power(const DiodeModel& m, double base, double resistance) {
    return best_of(m, base, resistance, [](const Operation& at) { return at.power; });
}

}  // namespace

Operation operate(const DiodeModel& model, double current, double temperature) {
    check(model, temperature, {{current, "current"}});
    return unchecked(model, current, temperature);
}

Steady steady(const DiodeModel& model, double current, double base_temperature, double thermal_resistance) {
    check(model, base_temperature, {{current, "current"}, {thermal_resistance, "thermal_resistance"}});
    return settle(model, current, base_temperature, thermal_resistance);
}

Rollover rollover(const DiodeModel& model, double base_temperature, double thermal_resistance) {
    check(model, base_temperature, {{thermal_resistance, "thermal_resistance"}});
    if (thermal_resistance == 0)
        throw Error(Problem{.what = "a diode that does not heat has no rollover",
                            .accepted = "above 0",
                            .path = "diode/thermal_resistance"});
    return {.largest_power = largest_power(model, base_temperature, thermal_resistance),
            .best_efficiency = best_of(model, base_temperature, thermal_resistance,
                                       [](const Operation& at) { return at.efficiency(); })};
}

std::optional<double> current_for_power(const DiodeModel& model, double power, double base_temperature,
                                        double thermal_resistance) {
    check(model, base_temperature, {{power, "power"}, {thermal_resistance, "thermal_resistance"}});
    if (power == 0) return 0.0;
    if (thermal_resistance == 0) {
        const Operation at = unchecked(model, 0, base_temperature);
        if (at.slope == 0) return std::nullopt;
        return at.threshold + power / at.slope;
    }
    const Operation top = largest_power(model, base_temperature, thermal_resistance);
    if (power > top.power) return std::nullopt;
    const auto reaches = [&](double current) {
        return settle(model, current, base_temperature, thermal_resistance).at.power >= power;
    };
    double low = model.threshold, high = top.current;
    for (int i = 1; i <= steps; ++i)
        if (const double current = rung(model, top.current, i); reaches(current)) {
            low = rung(model, top.current, i - 1), high = current;
            break;
        }
    for (int i = 0; i < 52; ++i) {
        const double middle = (low + high) / 2;
        (reaches(middle) ? high : low) = middle;
    }
    return high;
}

DiodePreset diode_preset(double aperture, double wavelength, int junctions) {
    Checked checked;
    checked.above_zero(aperture, "aperture");
    checked.above_zero(wavelength, "wavelength");
    checked.demand(junctions >= 1, junctions, "junctions", "1 or more");
    checked.done();
    struct Material {
        double wavelength, slope, voltage;  // of one junction
    };
    constexpr std::array<Material, 3> known{{{850e-9, 1.0, 1.45}, {905e-9, 1.0, 1.55}, {940e-9, 1.17, 1.55}}};
    const double within = std::clamp(wavelength, known.front().wavelength, known.back().wavelength);
    const auto& [left, right] =
        within < known[1].wavelength ? std::pair(known[0], known[1]) : std::pair(known[1], known[2]);
    const double share = (within - left.wavelength) / (right.wavelength - left.wavelength);
    const double d = aperture / 1e-6, more = junctions - 1;
    DiodePreset preset;
    preset.model = {.junctions = junctions,
                    .threshold = (0.1 + 0.008 * d * d) * 1e-3,
                    .slope = junctions * std::lerp(left.slope, right.slope, share),
                    .voltage = junctions * std::lerp(left.voltage, right.voltage, share) + 0.1 * more,
                    .resistance = (10 + 250 / d + 3000 / (d * d)) * (1 + 0.25 * more)};
    // The limits themselves are inside, however their last digit is rounded.
    const auto outside = [](double value, double least, double most) {
        return value < least * (1 - 1e-12) || value > most * (1 + 1e-12);
    };
    preset.outside_fit =
        outside(aperture, 3e-6, 20e-6) || outside(wavelength, 850e-9, 940e-9) || junctions > 8;
    return preset;
}

double quantum_efficiency(const DiodeModel& model, double wavelength) {
    return model.slope / model.junctions * elementary_charge / photon_energy(wavelength);
}

double current_density(double current, double aperture) { return current / (pi * aperture * aperture / 4); }

}  // namespace glint
