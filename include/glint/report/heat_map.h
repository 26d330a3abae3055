// A grid of values as a picture.
#pragma once

#include <glint/report/frame.h>

#include <cstddef>
#include <string>
#include <vector>

namespace glint {

/// Cells to draw one outline around, e.g. the pixels that see one zone.
struct CellGroup {
    std::vector<std::size_t> cells;  ///< row * columns + column
    std::string name;                ///< legend text; empty: not in the legend
    Colour colour = palette::ink;
};

/// A rectangle, or a place when low = high, with a word beside it.
struct MapMark {
    Vec2 low = Vec2::Zero(), high = Vec2::Zero();  ///< axis units; cut at the edge of the map
    std::string text;                              ///< over it, or under it without room there
};

struct HeatMap {
    Heading heading;
    std::size_t rows = 0, columns = 0;
    std::vector<double> values;  ///< [rows x columns], row 0 at the TOP; NaN: no data, drawn hatched
    Axis horizontal;             ///< range: left edge of column 0 to right edge of the last
    Axis vertical;               ///< range: bottom edge of the last row to top edge of row 0
    ColourScale colours;
    std::vector<CellGroup> groups;
    std::vector<MapMark> marks;
    std::string no_data = "no data";  ///< legend text, shown when a value is NaN
    bool equal_units = false;         ///< one unit is as long across as up
    PageSize size;
};

/// Draws the map. Error when values is not rows * columns long, is empty, holds an infinity, or a group names
/// a cell that is not there.
[[nodiscard]] Canvas draw(const HeatMap& map);

}  // namespace glint
