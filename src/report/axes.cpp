// Axes: shares, numbers that fit, labels.
#include <glint/report/axes.h>
#include <glint/report/font.h>

#include <algorithm>
#include <cmath>

namespace glint {

namespace {

/// Room a number takes along its axis, centred on its tick.
double extent_of(const std::string& label, AxisRun run, double text_size) {
    const FontHeights heights = font_heights(text_size);
    return run == AxisRun::across ? text_width(label, text_size) + 10 : heights.ascent + heights.descent + 5;
}

/// Numbers that stand clear of the number before them; `keep` is one flag a number.
std::vector<bool> clear_numbers(const Ticks& ticks, const Axis& axis, double length, AxisRun run,
                                double text_size) {
    std::vector<bool> keep(ticks.values.size(), true);
    double occupied = -1e300;
    // A reversed axis runs from high to low.
    const bool reversed = axis.range.low > axis.range.high;
    for (std::size_t n = 0; n < keep.size(); ++n) {
        const std::size_t i = reversed ? keep.size() - 1 - n : n;
        const double middle = share_along(axis, ticks.values[i]) * length;
        const double half = extent_of(ticks.labels[i], run, text_size) / 2;
        keep[i] = middle - half >= occupied;
        if (keep[i]) occupied = middle + half;
    }
    return keep;
}

}  // namespace

double share_along(const Axis& axis, double value) {
    const auto [low, high] = axis.range;
    if (axis.spacing == Spacing::linear) return (value - low) / (high - low);
    return std::log(value / low) / std::log(high / low);
}

Ticks fitting_ticks(const Axis& axis, double length, AxisRun run, double text_size) {
    const auto [low, high] = std::minmax({axis.range.low, axis.range.high});
    const auto ticks_for = [&, low = low, high = high](int about) {
        return axis.spacing == Spacing::linear ? round_ticks(low, high, about)
                                               : decade_ticks(low, high, about);
    };
    const int most = std::clamp(static_cast<int>(length / (run == AxisRun::across ? 90 : 62)), 2, 12);
    for (int about = most; about >= 1; --about) {
        Ticks ticks = ticks_for(about);
        const std::vector<bool> keep = clear_numbers(ticks, axis, length, run, text_size);
        if (std::find(keep.begin(), keep.end(), false) == keep.end()) return ticks;
    }
    Ticks ticks = ticks_for(1);
    const std::vector<bool> keep = clear_numbers(ticks, axis, length, run, text_size);
    Ticks thinned{.minor = ticks.minor, .exponent = ticks.exponent};
    for (std::size_t i = 0; i < keep.size(); ++i) {
        if (!keep[i]) {
            thinned.minor.push_back(ticks.values[i]);
            continue;
        }
        thinned.values.push_back(ticks.values[i]);
        thinned.labels.push_back(ticks.labels[i]);
    }
    return thinned;
}

std::string label_text(const std::string& label, const std::string& unit, int exponent) {
    const std::string scale = exponent == 0 ? "" : "×\u2009" + power_text(exponent);
    const std::string inside = scale.empty() || unit.empty() ? scale + unit : scale + " " + unit;
    if (inside.empty()) return label;
    return label.empty() ? inside : label + " (" + inside + ")";
}

}  // namespace glint
