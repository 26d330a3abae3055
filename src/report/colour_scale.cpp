// Values to colours.
#include <glint/core/error.h>
#include <glint/report/colour_scale.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>

namespace glint {

namespace {

[[noreturn]] void refuse(const ColourScale& scale, const std::string& what, const std::string& accepted) {
    const std::string name =
        scale.label.empty() ? "a colour scale" : "the colour scale '" + scale.label + "'";
    throw Error(Problem{.what = name + " " + what, .accepted = accepted});
}

/// Lowest and highest of the values, NaN left out.
std::optional<AxisRange> range_of(const ColourScale& scale, std::span<const double> values) {
    std::optional<AxisRange> range;
    for (const double value : values) {
        if (std::isnan(value)) continue;
        if (std::isinf(value))
            refuse(scale, "was given an infinite value", "finite values, or NaN for no data");
        if (scale.spacing == Spacing::logarithmic && value <= 0)
            refuse(scale, fmt::format("is logarithmic and was given {}", value),
                   "values above 0, or NaN for no data");
        if (!range) range = {value, value};
        range = {std::min(range->low, value), std::max(range->high, value)};
    }
    return range;
}

/// Room around a single value.
AxisRange opened(const AxisRange& range, bool logarithmic) {
    if (range.low < range.high) return range;
    if (logarithmic) return {range.low / 2, range.high * 2};
    const double half = range.low == 0 ? 1 : std::abs(range.low) / 10;
    return {range.low - half, range.high + half};
}

}  // namespace

Colour SettledScale::at(double share) const {
    const double t = reversed ? 1 - share : share;
    return path == ColourPath::sequential ? sequential_colour(t) : diverging_colour(t);
}

Colour SettledScale::of(double value) const {
    return std::isnan(value) ? palette::no_data : at(share_along(axis, value));
}

SettledScale settle(const ColourScale& scale, std::span<const double> values) {
    const bool logarithmic = scale.spacing == Spacing::logarithmic;
    if (logarithmic && scale.path == ColourPath::diverging)
        refuse(scale, "is both logarithmic and diverging", "one of the two");
    const std::optional<AxisRange> shown = range_of(scale, values);
    if (scale.range && !(scale.range->low < scale.range->high && (!logarithmic || scale.range->low > 0)))
        refuse(scale, "has an empty range", "the lower bound first, above 0 when logarithmic");
    AxisRange range =
        scale.range ? *scale.range
                    : opened(shown.value_or(logarithmic ? AxisRange{1, 10} : AxisRange{0, 1}), logarithmic);
    if (scale.path == ColourPath::diverging) {
        const double half = std::max(std::abs(range.low - scale.centre), std::abs(range.high - scale.centre));
        range = {scale.centre - half, scale.centre + half};
    }
    return {.axis = {.label = scale.label, .unit = scale.unit, .range = range, .spacing = scale.spacing},
            .path = scale.path,
            .reversed = scale.reversed,
            .below = shown && shown->low < range.low,
            .above = shown && shown->high > range.high};
}

}  // namespace glint
