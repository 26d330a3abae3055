// The limits of one class, wavelength and mechanism, made ready for many durations and subtenses.
#include "refuse.h"

#include <glint/safety/factors.h>
#include <glint/safety/limit_curve.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <span>
#include <string>

namespace glint {
namespace {

void add(LimitCurve& curve, std::span<const LimitRow> rows, double wavelength, Interval durations) {
    for (const LimitRow& row : rows) {
        if (row.mechanism != curve.mechanism || !touches(row.wavelength, wavelength)) continue;
        LimitCurve::Piece piece{.duration = {std::max(row.duration.from, durations.from),
                                             std::min(row.duration.to, durations.to)},
                                .coefficient = row.coefficient,
                                .exponent = row.exponent,
                                .C6 = row.times.C6,
                                .T2 = row.times.T2,
                                .watt = row.unit == LimitUnit::watt,
                                .source = row.source,
                                .reach = row.reach};
        if (row.times.C3) piece.coefficient *= c3(wavelength);
        if (row.times.C4) piece.coefficient *= c4(wavelength);
        if (row.times.C7) piece.coefficient *= c7(wavelength);
        // The Class 3B rows for up to and beyond 60 ms times C4 meet at a duration that is known here.
        if (row.reach == Reach::up_to_60_ms_C4)
            piece.duration.to = std::min(piece.duration.to, 0.06 * c4(wavelength));
        if (row.reach == Reach::beyond_60_ms_C4)
            piece.duration.from = std::max(piece.duration.from, 0.06 * c4(wavelength));
        if (piece.duration.from > piece.duration.to) continue;
        curve.pieces.push_back(piece);
        curve.bends.push_back(piece.duration.from);
        curve.bends.push_back(piece.duration.to);
    }
}

double power(double t, double exponent) {
    if (exponent == 0) return 1;
    if (exponent == 0.75) return std::sqrt(t) * std::sqrt(std::sqrt(t));
    return std::pow(t, exponent);
}

}  // namespace

double LimitCurve::energy(double duration, double subtense, double t2) const {
    double least = std::numeric_limits<double>::infinity();
    for (const Piece& piece : pieces) {
        if (!touches(piece.duration, duration) || !holds_for(piece.source, subtense)) continue;
        if (piece.reach == Reach::up_to_T2 && !touches({0, t2}, duration)) continue;
        if (piece.reach == Reach::beyond_T2 && !touches({t2, limit_durations.to}, duration)) continue;
        double value = piece.coefficient * power(duration, piece.exponent);
        if (piece.C6) value *= std::max(1.0, subtense / alpha_min);
        if (piece.T2) value /= std::sqrt(std::sqrt(t2));
        if (piece.watt) value *= duration;
        least = std::min(least, value);
    }
    return least;
}

LimitCurve limit_curve(LaserClass laser_class, double wavelength, Mechanism mechanism) {
    check_wavelength(wavelength);
    LimitCurve curve{.mechanism = mechanism, .pieces = {}, .bends = {}};
    switch (laser_class) {
        case LaserClass::class_1:
        case LaserClass::class_1M:
            add(curve, limit_rows::class_1, wavelength, limit_durations);
            break;
        case LaserClass::class_2:
        case LaserClass::class_2M:
            if (touches({700e-9, 1800e-9}, wavelength))
                refuse(std::string(name_of(laser_class)) + " has no limit at this wavelength",
                       "a wavelength from 400 nm to below 700 nm");
            add(curve, limit_rows::class_1, wavelength, {limit_durations.from, aversion_time_base});
            add(curve, limit_rows::class_2, wavelength, {aversion_time_base, limit_durations.to});
            break;
        case LaserClass::class_3R:
            add(curve, limit_rows::class_3R, wavelength, limit_durations);
            break;
        case LaserClass::class_3B:
            break;
        case LaserClass::class_4:
            refuse("Class 4 has no limit", "Class 1, 1M, 2, 2M, 3R or 3B");
    }
    add(curve, limit_rows::class_3B, wavelength, limit_durations);
    std::ranges::sort(curve.bends);
    curve.bends.erase(std::unique(curve.bends.begin(), curve.bends.end()), curve.bends.end());
    return curve;
}

}  // namespace glint
