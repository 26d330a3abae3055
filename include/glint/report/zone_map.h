// Zones over a field of view as a picture.
#pragma once

#include <glint/report/frame.h>

#include <string>
#include <vector>

namespace glint {

/// One zone of the field: any number of polygons that share one value.
struct ZoneShape {
    std::vector<std::vector<Vec2>> polygons;  ///< corners in axis units, at least 3 each
    double value = 0;                         ///< NaN: no data, drawn hatched
    std::string
        number;  ///< written in the middle of each polygon where it fits clear of others; may be empty
};

/// A line drawn over the zones, e.g. the edge of the receiver's field.
struct FieldOutline {
    std::vector<Vec2> corners;  ///< axis units, closed
    std::string name;           ///< legend text
    Colour colour = palette::ink;
};

struct ZoneMap {
    Heading heading;
    std::vector<ZoneShape> zones;  ///< drawn in order
    std::vector<FieldOutline> outlines;
    Axis horizontal = {.label = "Horizontal angle", .unit = "°", .range = {}};  ///< positive right
    Axis vertical = {.label = "Vertical angle", .unit = "°", .range = {}};      ///< positive up
    bool fit = true;  ///< set both axis ranges from the zones and outlines, with a margin
    ColourScale colours;
    double opacity = 1;  ///< below 1 lets zones that overlap show through
    std::string no_data = "no data";
    PageSize size;
};

/// Draws the map with equal units across and up. Error for a polygon of fewer than 3 corners, corners that
/// are not finite, an infinite value.
[[nodiscard]] Canvas draw(const ZoneMap& map);

/// Corners of an ellipse with semi-axes `half` turned by `turn` [rad, counter-clockwise].
[[nodiscard]] std::vector<Vec2> ellipse(const Vec2& centre, const Vec2& half, double turn = 0,
                                        int corners = 64);

/// Corners of an upright rectangle.
[[nodiscard]] std::vector<Vec2> rectangle(const Vec2& centre, const Vec2& half);

}  // namespace glint
