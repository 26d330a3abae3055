// Finds the rows that cover an emission and keeps the smallest limit.
#include <glint/core/quantity.h>
#include <glint/safety/limits.h>
#include "refuse.h"

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <cmath>

namespace glint {

bool holds_for(SourceSize source, double subtense) {
    switch (source) {
        case SourceSize::any:
            return true;
        case SourceSize::point:
            return subtense <= point_source;
        case SourceSize::extended:
            return subtense > point_source;
        case SourceSize::extended_to_82_mrad:
            return subtense > point_source && touches({0, 82e-3}, subtense);
    }
    return false;
}

namespace {

bool within(Reach reach, const EmissionWindow& emission) {
    switch (reach) {
        case Reach::whole:
            return true;
        case Reach::up_to_T2:
            return touches({0, t2(emission.subtense)}, emission.duration);
        case Reach::beyond_T2:
            return touches({t2(emission.subtense), limit_durations.to}, emission.duration);
        case Reach::up_to_60_ms_C4:
            return touches({0, 0.06 * c4(emission.wavelength)}, emission.duration);
        case Reach::beyond_60_ms_C4:
            return touches({0.06 * c4(emission.wavelength), limit_durations.to}, emission.duration);
    }
    return false;
}

bool covers(const LimitRow& row, const EmissionWindow& emission) {
    return touches(row.wavelength, emission.wavelength) && touches(row.duration, emission.duration) &&
           holds_for(row.source, emission.subtense) && within(row.reach, emission);
}

double energy_of(const LimitRow& row, const EmissionWindow& emission) {
    double value = row.coefficient;
    if (row.exponent != 0) value *= std::pow(emission.duration, row.exponent);
    if (row.times.C3) value *= c3(emission.wavelength);
    if (row.times.C4) value *= c4(emission.wavelength);
    if (row.times.C6) value *= c6(emission.subtense, emission.duration);
    if (row.times.C7) value *= c7(emission.wavelength);
    if (row.times.T2) value *= std::pow(t2(emission.subtense), -0.25);
    return row.unit == LimitUnit::watt ? value * emission.duration : value;
}

// The tables a class is bound by: its own, and the one that bounds every class from above.
struct Tables {
    std::array<std::span<const LimitRow>, 3> parts;
};

Tables tables_of(LaserClass laser_class, const EmissionWindow& emission) {
    const std::span<const LimitRow> ceiling = limit_rows::class_3B;
    switch (laser_class) {
        case LaserClass::class_1:
        case LaserClass::class_1M:
            return {{limit_rows::class_1, ceiling}};
        case LaserClass::class_2:
        case LaserClass::class_2M:
            if (touches({700e-9, 1800e-9}, emission.wavelength))
                refuse(fmt::format("{} has no limit at {}", name_of(laser_class),
                                   fmt::format("{:g} nm", emission.wavelength * 1e9)),
                       "a wavelength from 400 nm to below 700 nm");
            if (touches({aversion_time_base, limit_durations.to}, emission.duration)) {
                const bool both = touches({0, aversion_time_base}, emission.duration);
                return {{limit_rows::class_2,
                         both ? std::span<const LimitRow>(limit_rows::class_1) : std::span<const LimitRow>(),
                         ceiling}};
            }
            return {{limit_rows::class_1, ceiling}};
        case LaserClass::class_3R:
            return {{limit_rows::class_3R, ceiling}};
        case LaserClass::class_3B:
            return {{ceiling}};
        case LaserClass::class_4:
            break;
    }
    refuse("Class 4 has no limit", "Class 1, 1M, 2, 2M, 3R or 3B");
}

template <class Wanted>
std::optional<Limit> smallest(LaserClass laser_class, const EmissionWindow& emission, Wanted wanted) {
    check_wavelength(emission.wavelength);
    check_duration(emission.duration);
    check_subtense(emission.subtense);
    std::optional<Limit> found;
    for (const std::span<const LimitRow> rows : tables_of(laser_class, emission).parts)
        for (const LimitRow& row : rows) {
            if (!wanted(row) || !covers(row, emission)) continue;
            const double energy = energy_of(row, emission);
            // On a tie the first row stands, so the answer does not depend on anything but the tables.
            if (!found || energy < found->energy)
                found = Limit{.energy = energy, .power = energy / emission.duration, .row = &row};
        }
    return found;
}

// "7.7e-7", not "7.7e-07": the way the tables write it.
std::string coefficient_text(double coefficient) {
    std::string text = fmt::format("{:.3g}", coefficient);
    const std::size_t exponent = text.find("e-0");
    if (exponent != std::string::npos) text.erase(exponent + 2, 1);
    return text;
}

}  // namespace

std::string_view name_of(Mechanism mechanism) {
    constexpr std::array<std::string_view, 4> names{"retinal thermal", "photochemical", "corneal",
                                                    "Class 3B ceiling"};
    return names[static_cast<std::size_t>(mechanism)];
}

Limit class_limit(LaserClass laser_class, const EmissionWindow& emission) {
    const std::optional<Limit> found = smallest(laser_class, emission, [](const LimitRow&) { return true; });
    // The Class 3B rows leave no gap, so a wavelength and duration that passed the door always find one.
    return found.value();
}

std::optional<Limit> class_limit(LaserClass laser_class, const EmissionWindow& emission,
                                 Mechanism mechanism) {
    return smallest(laser_class, emission,
                    [mechanism](const LimitRow& row) { return row.mechanism == mechanism; });
}

double RatioSums::largest() const { return std::max({retinal_thermal, photochemical, corneal, ceiling}); }

RatioSums additive_ratios(LaserClass laser_class, std::span<const Emission> emissions) {
    RatioSums sums;
    for (const Emission& emission : emissions) {
        check_not_negative(emission.energy, "emission");
        const auto ratio = [&](Mechanism mechanism) {
            const std::optional<Limit> limit = class_limit(laser_class, emission.window, mechanism);
            return limit ? emission.energy / limit->energy : 0;
        };
        sums.retinal_thermal += ratio(Mechanism::retinal_thermal);
        sums.photochemical += ratio(Mechanism::photochemical);
        sums.corneal += ratio(Mechanism::corneal);
        sums.ceiling += ratio(Mechanism::ceiling);
    }
    return sums;
}

std::string describe(const LimitRow& row) {
    std::string text = coefficient_text(row.coefficient);
    if (row.exponent != 0) text += fmt::format(" t^{:g}", row.exponent);
    if (row.times.C3) text += " C3";
    if (row.times.C4) text += " C4";
    if (row.times.C6) text += " C6";
    if (row.times.C7) text += " C7";
    if (row.times.T2) text += " T2^-0.25";
    text += row.unit == LimitUnit::watt ? " W" : " J";
    text +=
        fmt::format(", {}, {:g} nm to {:g} nm, {} to {}", name_of(row.mechanism), row.wavelength.from * 1e9,
                    row.wavelength.to * 1e9, show_quantity(row.duration.from, Kind::time),
                    show_quantity(row.duration.to, Kind::time));
    if (row.source == SourceSize::point) text += ", point source";
    if (row.source == SourceSize::extended) text += ", extended source";
    if (row.source == SourceSize::extended_to_82_mrad) text += ", extended source to 82 mrad";
    if (row.reach == Reach::up_to_T2) text += ", up to T2";
    if (row.reach == Reach::beyond_T2) text += ", beyond T2";
    if (row.reach == Reach::up_to_60_ms_C4) text += ", up to 60 ms times C4";
    if (row.reach == Reach::beyond_60_ms_C4) text += ", beyond 60 ms times C4";
    return text;
}

}  // namespace glint
