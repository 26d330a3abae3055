// Drawing what surrounds the data: grid, border, ticks, colour bar, legend, texts.
#include <glint/report/frame.h>

#include <algorithm>
#include <cmath>

namespace glint {

namespace {

constexpr Colour border = rgb8(140, 148, 158);
constexpr double major = 5, minor = 3;

Pen thin(const Colour& colour) { return {.colour = colour, .width = 1, .cap = Cap::butt, .dashes = {}}; }

/// Middle of the pixel column or row pair nearest to `at`, so that a line one unit wide is sharp.
double sharp(double at, double density) { return std::round(at * density) / density; }

void draw_across_ticks(Canvas& canvas, const Frame& frame) {
    const Axis& axis = *frame.content.horizontal;
    const auto mark = [&](double value, double length) {
        const double x =
            sharp(frame.plot.left + share_along(axis, value) * frame.plot.width(), canvas.density());
        canvas.line({x, frame.plot.bottom}, {x, frame.plot.bottom + length}, thin(border));
    };
    for (const double value : frame.horizontal_ticks.values) mark(value, major);
    if (axis.spacing == Spacing::logarithmic)
        for (const double value : frame.horizontal_ticks.minor) mark(value, minor);
}

void draw_upward_ticks(Canvas& canvas, const Axis& axis, const Ticks& ticks, const PageBox& box,
                       bool on_left) {
    const double start = on_left ? box.left : box.right, side = on_left ? -1 : 1;
    const auto mark = [&](double value, double length) {
        const double y = sharp(box.bottom - share_along(axis, value) * box.height(), canvas.density());
        canvas.line({start, y}, {start + side * length, y}, thin(border));
    };
    for (const double value : ticks.values) mark(value, major);
    if (axis.spacing == Spacing::logarithmic)
        for (const double value : ticks.minor) mark(value, minor);
}

void draw_colour_bar(Canvas& canvas, const Frame& frame) {
    const SettledScale& colours = *frame.content.colours;
    const PageBox& bar = frame.colour_bar;
    const double density = canvas.density(), tip = 9;
    const auto rows = static_cast<int>(std::round(bar.height() * density));
    for (int row = 0; row < rows; ++row) {
        const double top = bar.top + row / density;
        canvas.fill_box({bar.left, top, bar.right, top + 1 / density}, colours.at(1 - (row + 0.5) / rows));
    }
    std::vector<Vec2> outline{{bar.left, bar.top}};
    const double middle = bar.centre().x();
    if (colours.above) {
        canvas.fill_polygon(
            std::vector<Vec2>{{bar.left, bar.top}, {middle, bar.top - tip}, {bar.right, bar.top}},
            colours.at(1));
        outline.push_back({middle, bar.top - tip});
    }
    outline.push_back({bar.right, bar.top});
    outline.push_back({bar.right, bar.bottom});
    if (colours.below) {
        canvas.fill_polygon(
            std::vector<Vec2>{{bar.left, bar.bottom}, {middle, bar.bottom + tip}, {bar.right, bar.bottom}},
            colours.at(0));
        outline.push_back({middle, bar.bottom + tip});
    }
    outline.push_back({bar.left, bar.bottom});
    canvas.polyline(outline, thin(border), true);
    draw_upward_ticks(canvas, colours.axis, frame.colour_ticks, bar, false);
}

void draw_sign(Canvas& canvas, const Frame::LegendSign& sign) {
    const Vec2 left = sign.at, right = sign.at + Vec2{24, 0};
    const PageBox sign_box{left.x() + 4, left.y() - 6, right.x() - 4, left.y() + 6};
    const std::vector<Vec2> corners = sign_box.corners();
    const Colour& colour = sign.entry.colour;
    using enum LegendEntry::Sign;
    switch (sign.entry.sign) {
        case line:
            canvas.line(left, right, {.colour = colour, .width = 2.2, .dashes = {}});
            break;
        case dashed:
            canvas.line(left, right, {.colour = colour, .width = 2, .cap = Cap::butt, .dashes = {5, 3.5}});
            break;
        case box:
            canvas.fill_polygon(corners, colour);
            break;
        case outline:
            canvas.polyline(corners, {.colour = colour, .width = 2, .dashes = {}}, true);
            break;
        case disc:
            canvas.fill_disc(sign_box.centre(), 4.5, colour);
            break;
        case hatch:
            fill_hatch(canvas, {corners});
            canvas.polyline(corners, thin(border), true);
            break;
    }
}

}  // namespace

void draw_ground(Canvas& canvas, const Frame& frame) {
    if (!frame.content.grid) return;
    const PageBox& plot = frame.plot;
    const auto column = [&](double value, const Colour& colour) {
        const double x =
            sharp(plot.left + share_along(*frame.content.horizontal, value) * plot.width(), canvas.density());
        canvas.line({x, plot.top}, {x, plot.bottom}, thin(colour));
    };
    const auto row = [&](double value, const Colour& colour) {
        const double y = sharp(plot.bottom - share_along(*frame.content.vertical, value) * plot.height(),
                               canvas.density());
        canvas.line({plot.left, y}, {plot.right, y}, thin(colour));
    };
    // On logarithmic axes the lines between whole decades are what makes a slope readable.
    const Colour faint = mix(palette::background, palette::grid, 0.45);
    const auto logarithmic = [](const std::optional<Axis>& axis) {
        return axis && axis->spacing == Spacing::logarithmic;
    };
    if (logarithmic(frame.content.horizontal))
        for (const double value : frame.horizontal_ticks.minor) column(value, faint);
    if (logarithmic(frame.content.vertical))
        for (const double value : frame.vertical_ticks.minor) row(value, faint);
    if (frame.content.horizontal)
        for (const double value : frame.horizontal_ticks.values) column(value, palette::grid);
    if (frame.content.vertical)
        for (const double value : frame.vertical_ticks.values) row(value, palette::grid);
}

void draw_surround(Canvas& canvas, const Frame& frame) {
    const PageBox& plot = frame.plot;
    if (frame.content.horizontal && frame.content.vertical)
        canvas.polyline(plot.corners(), thin(border), true);
    if (frame.content.horizontal) draw_across_ticks(canvas, frame);
    if (frame.content.vertical)
        draw_upward_ticks(canvas, *frame.content.vertical, frame.vertical_ticks, plot, true);
    if (frame.content.colours) draw_colour_bar(canvas, frame);
    for (const Frame::LegendSign& sign : frame.legend) draw_sign(canvas, sign);
    for (const Frame::Text& text : frame.texts) canvas.text(text.at, text.text, text.style);
}

void fill_hatch(Canvas& canvas, const std::vector<std::vector<Vec2>>& rings) {
    canvas.fill_rings(rings, palette::no_data);
    std::vector<std::vector<Vec2>> scaled = rings;
    for (std::vector<Vec2>& ring : scaled)
        for (Vec2& corner : ring) corner *= canvas.density();
    const Coverage coverage =
        cover(scaled, {.left = 0, .top = 0, .right = canvas.pixel_width(), .bottom = canvas.pixel_height()});
    const PixelWindow& window = coverage.window;
    const double period = 6 * canvas.density(), half = 0.45 * canvas.density();
    for (int row = window.top; row < window.bottom; ++row)
        for (int column = window.left; column < window.right; ++column) {
            const double phase = std::fmod(row + column + 1.0, period);
            const double away = std::min(phase, period - phase) / std::sqrt(2.0);
            const double stripe = std::clamp(half + 0.5 - away, 0.0, 1.0);
            const std::size_t at =
                static_cast<std::size_t>(row - window.top) * window.width() + (column - window.left);
            if (stripe > 0) canvas.pixel(column, row, palette::no_data_line, stripe * coverage.share[at]);
        }
}

}  // namespace glint
