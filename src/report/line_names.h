// Where the names of curves and reference lines stand in a plot.
#pragma once

#include <glint/report/line_plot.h>

#include <optional>
#include <utility>
#include <vector>

namespace glint {

constexpr TextStyle curve_name_style{.size = 12.5, .weight = Weight::semibold, .anchor = Anchor::middle};
constexpr double curve_name_height = 17;  ///< least distance between two names, units

/// Does the point show? Points with NaN are gaps.
[[nodiscard]] bool drawn(const Vec2& point);

/// The two ends of a reference line on the page.
[[nodiscard]] std::pair<Vec2, Vec2> ends_of(const ReferenceLine& line, const Frame& frame);

/// How the name of a reference line is set.
[[nodiscard]] TextStyle style_of(const ReferenceLine& line);

/// Places for the names of reference lines, one each: along the line, to either side, where fewest curves run
/// and clear of the names before it. None: no such place.
[[nodiscard]] std::vector<std::optional<Vec2>> reference_places(const LinePlot& plot, const Frame& frame);

/// The name of a curve beside the plot.
struct EndName {
    std::size_t curve = 0;
    Vec2 end = Vec2::Zero();  ///< last point of the curve inside the plot, page units
    double height = 0;        ///< y of the name: at the end, or moved off to stand clear of others
};

/// Names of all curves that have one and end inside the plot, from the top down.
[[nodiscard]] std::vector<EndName> end_names(const LinePlot& plot, const Frame& frame);

}  // namespace glint
