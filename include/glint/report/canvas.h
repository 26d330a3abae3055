// A picture to draw on: anti-aliased shapes and text in page units, at any pixel density.
#pragma once

#include <glint/core/vector.h>
#include <glint/report/colours.h>
#include <glint/report/coverage.h>
#include <glint/report/font.h>

#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace glint {

/// A rectangle of the page [units, y down].
struct PageBox {
    double left = 0, top = 0, right = 0, bottom = 0;

    [[nodiscard]] double width() const { return right - left; }
    [[nodiscard]] double height() const { return bottom - top; }
    [[nodiscard]] Vec2 centre() const { return {(left + right) / 2, (top + bottom) / 2}; }
    [[nodiscard]] bool holds(const PageBox& other) const;
    [[nodiscard]] bool overlaps(const PageBox& other) const;
    [[nodiscard]] PageBox grown(double by) const;
    [[nodiscard]] std::vector<Vec2> corners() const;
};

enum class Cap { butt, round };
enum class Align { left, centre, right };
enum class Anchor { baseline, middle };  ///< middle: half the height of a capital sits on the point
enum class Reading { across, upward };   ///< upward: turned a quarter to the left, for vertical axes

/// How a line is drawn.
struct Pen {
    Colour colour = palette::ink;
    double width = 1;            ///< units
    Cap cap = Cap::round;        ///< ends of the line and of every dash; joints are always round
    std::vector<double> dashes;  ///< lengths on, off, on, off ... [units]; empty: unbroken
};

/// How a text is drawn.
struct TextStyle {
    double size = 12.5;  ///< height of the em [units]
    Weight weight = Weight::regular;
    Colour colour = palette::ink;
    Align align = Align::left;
    Anchor anchor = Anchor::baseline;
    Reading reading = Reading::across;
    double halo = 0;  ///< width of a rim around the letters [units]
    Colour halo_colour = with_alpha(palette::background, 0.9);
};

/// A text that was drawn and the box it takes: advance width by ascent and descent.
struct Label {
    std::string text;
    PageBox box;
};

/// An RGB image measured in page units: x right, y down, (0, 0) the upper left corner. Colours blend in
/// encoded sRGB. Drawing never depends on anything but the calls made, in their order.
class Canvas {
public:
    /// A page of `width` x `height` units with `density` pixels a unit. Error unless the image has 1 to 16384
    /// pixels each way.
    Canvas(double width, double height, double density = 2, const Colour& background = palette::background);

    [[nodiscard]] double width() const { return pixel_width_ / density_; }
    [[nodiscard]] double height() const { return pixel_height_ / density_; }
    [[nodiscard]] double density() const { return density_; }
    [[nodiscard]] int pixel_width() const { return pixel_width_; }
    [[nodiscard]] int pixel_height() const { return pixel_height_; }
    /// Red, green, blue of every pixel, row by row from the top.
    [[nodiscard]] std::span<const std::uint8_t> pixels() const { return pixels_; }
    /// Every text drawn so far.
    [[nodiscard]] std::span<const Label> labels() const { return labels_; }
    [[nodiscard]] PageBox page() const { return {0, 0, width(), height()}; }

    /// Drawing stays inside `box` from now on; std::nullopt lifts the limit.
    void clip(const std::optional<PageBox>& box);

    void fill_box(const PageBox& box, const Colour& colour);
    /// Fills closed polygons; one inside another makes a hole when it runs the other way.
    void fill_rings(std::span<const std::vector<Vec2>> rings, const Colour& colour);
    void fill_polygon(std::span<const Vec2> corners, const Colour& colour);
    void fill_disc(const Vec2& centre, double radius, const Colour& colour);
    void line(const Vec2& from, const Vec2& to, const Pen& pen);
    /// Joins the points in order; closed: also last to first. Covers every pixel once, however it crosses
    /// itself.
    void polyline(std::span<const Vec2> points, const Pen& pen, bool closed = false);
    void circle(const Vec2& centre, double radius, const Pen& pen);
    /// Draws UTF-8 `text` with its aligned point at `at` and records its box. Empty text draws nothing.
    void text(const Vec2& at, std::string_view text, const TextStyle& style);
    /// Blends one pixel, not units; outside the image or the clip does nothing.
    void pixel(int column, int row, const Colour& colour, double share = 1);

private:
    void blend(const Coverage& coverage, const Colour& colour);
    [[nodiscard]] Vec2 device(const Vec2& units) const { return units * density_; }

    double density_;
    int pixel_width_ = 0, pixel_height_ = 0;
    PixelWindow clip_;
    std::vector<std::uint8_t> pixels_;
    std::vector<Label> labels_;
};

/// The box text() would take.
[[nodiscard]] PageBox text_box(const Vec2& at, std::string_view text, const TextStyle& style);

}  // namespace glint
