// How a picture is divided between data, axes, colour bar, legend and heading.
#pragma once

#include <glint/report/axes.h>
#include <glint/report/canvas.h>
#include <glint/report/colour_scale.h>

#include <optional>
#include <string>
#include <vector>

namespace glint {

/// Size of a picture [units] and pixels per unit.
struct PageSize {
    double width = 900, height = 640;
    double density = 2;
};

/// Words over and under a picture; any may be empty. Long ones run over several lines.
struct Heading {
    std::string title;
    std::string subtitle;
    std::string note;  ///< small, at the foot
};

/// One line of a legend.
struct LegendEntry {
    enum class Sign { line, dashed, box, outline, disc, hatch };
    std::string name;
    Colour colour;
    Sign sign = Sign::line;
};

/// What surrounds the data of a picture.
struct FrameContent {
    Heading heading;
    std::optional<Axis> horizontal, vertical;  ///< none: no axis on that side, and no border without both
    std::optional<SettledScale> colours;       ///< a colour bar on the right
    std::vector<LegendEntry> legend;           ///< in rows under the heading
    double aspect = 0;  ///< page length of a vertical unit over that of a horizontal one; 0: fill the page
    double right_room = 0;  ///< room kept free beside the plot, for names of curves
    bool grid = true;       ///< lines at the ticks
};

/// The picture divided up. Every text lies on the page and none touches another.
struct Frame {
    struct Text {
        Vec2 at;
        std::string text;
        TextStyle style;
    };
    struct LegendSign {
        LegendEntry entry;
        Vec2 at;  ///< left end, middle height
    };
    FrameContent content;
    PageBox plot;        ///< where data goes
    PageBox colour_bar;  ///< without pointed ends; empty when there is none
    Ticks horizontal_ticks, vertical_ticks, colour_ticks;
    std::vector<Text> texts;
    std::vector<LegendSign> legend;
    double spare_width = 0, spare_height = 0;  ///< part of the page that `aspect` left unused

    /// Page position of a data point. Needs both axes.
    [[nodiscard]] Vec2 place(const Vec2& data) const;
};

/// Divides `page` from measured texts. Error when less than 40 x 40 units remain for the data, or for a bad
/// axis range.
[[nodiscard]] Frame lay_out(const PageBox& page, const FrameContent& content);

/// A page and how it is divided.
struct FittedPage {
    PageSize size;
    Frame frame;
};

/// Divides a page of `size`, after cutting off what `aspect` would leave empty.
[[nodiscard]] FittedPage fit_page(const PageSize& size, const FrameContent& content);

/// Draws the grid, under the data.
void draw_ground(Canvas& canvas, const Frame& frame);

/// Draws border, ticks, colour bar, legend and all texts, over and around the data.
void draw_surround(Canvas& canvas, const Frame& frame);

/// Fills polygons with the hatch that stands for "no data".
void fill_hatch(Canvas& canvas, const std::vector<std::vector<Vec2>>& rings);

}  // namespace glint
