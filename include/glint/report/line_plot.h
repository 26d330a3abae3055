// Curves on linear or logarithmic axes.
#pragma once

#include <glint/report/frame.h>

#include <optional>
#include <string>
#include <vector>

namespace glint {

struct Curve {
    std::string name;              ///< written at the curve's end, or in the legend; may be empty
    std::vector<Vec2> points;      ///< axis units; a NaN in a point breaks the line there
    std::optional<Colour> colour;  ///< none: next of palette::categories
    bool dashed = false;
    bool line = true;      ///< join the points
    bool markers = false;  ///< a disc at each point
};

/// A straight line across the plot at one value, e.g. a limit.
struct ReferenceLine {
    enum class Across { horizontal, vertical };
    Across across = Across::horizontal;  ///< horizontal: at a value of the vertical axis
    double value = 0;
    std::string name;  ///< written along it
};

struct LinePlot {
    Heading heading;
    std::vector<Curve> curves;
    std::vector<ReferenceLine> references;
    Axis horizontal, vertical;
    bool fit_horizontal = true, fit_vertical = true;  ///< set the axis range from the points, with a margin
    enum class Naming { automatic, at_ends, legend } naming = Naming::automatic;
    PageSize size = {.width = 900, .height = 560};
};

/// Draws the plot. Error for infinite numbers, or numbers <= 0 on a logarithmic axis, or no finite point when
/// a range has to be fitted.
[[nodiscard]] Canvas draw(const LinePlot& plot);

}  // namespace glint
