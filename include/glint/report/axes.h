// Axes: a range, its numbers, and the share of the way along it.
#pragma once

#include <glint/report/ticks.h>

#include <string>

namespace glint {

/// Lowest and highest value. On an axis low > high is allowed and turns it round.
struct AxisRange {
    double low = 0, high = 1;
};

/// One axis: values are in `unit`, which is only written, never converted.
struct Axis {
    std::string label;
    std::string unit;  ///< may be empty
    AxisRange range;
    Spacing spacing = Spacing::linear;
};

/// Share of the way along the axis, 0 at range.low and 1 at range.high. Not cut to [0, 1].
[[nodiscard]] double share_along(const Axis& axis, double value);

/// Which way the numbers of an axis follow each other.
enum class AxisRun { across, upward };

/// As many ticks as stand on an axis `length` units long without their numbers (height `text_size`) coming
/// closer than 10 units across or 5 units upward. Error when the range is empty, not finite, or not positive
/// on a logarithmic axis.
[[nodiscard]] Ticks fitting_ticks(const Axis& axis, double length, AxisRun run, double text_size);

/// "label (unit)", with a power of ten before the unit when ticks share one; parts that are empty are left
/// out.
[[nodiscard]] std::string label_text(const std::string& label, const std::string& unit, int exponent = 0);

}  // namespace glint
