// A grid of values as a picture.
#include <glint/core/error.h>
#include <glint/report/heat_map.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>

namespace glint {

namespace {

void require_sound(const HeatMap& map) {
    if (map.rows == 0 || map.columns == 0 || map.values.size() != map.rows * map.columns)
        throw Error(Problem{.what = fmt::format("a heat map of {} x {} cells was given {} values", map.rows,
                                                map.columns, map.values.size()),
                            .accepted = "one value a cell and at least one cell"});
    for (const CellGroup& group : map.groups)
        for (const std::size_t cell : group.cells)
            if (cell >= map.values.size())
                throw Error(Problem{.what = fmt::format("the group '{}' names cell {}", group.name, cell),
                                    .accepted = fmt::format("cells 0 to {}", map.values.size() - 1)});
}

/// Page position of the edge before column or row `index`, on whole pixels so that no seam shows between
/// cells.
double edge(double low, double high, std::size_t index, std::size_t count, double density) {
    const double at = low + (high - low) * static_cast<double>(index) / static_cast<double>(count);
    return std::round(at * density) / density;
}

void draw_group(Canvas& canvas, const HeatMap& map, const PageBox& plot, const CellGroup& group) {
    std::vector<bool> inside(map.values.size(), false);
    for (const std::size_t cell : group.cells) inside[cell] = true;
    const auto member = [&](std::size_t row, std::size_t column, int down, int right) {
        const auto r = static_cast<long long>(row) + down, c = static_cast<long long>(column) + right;
        if (r < 0 || c < 0 || r >= static_cast<long long>(map.rows) ||
            c >= static_cast<long long>(map.columns))
            return false;
        return static_cast<bool>(
            inside[static_cast<std::size_t>(r) * map.columns + static_cast<std::size_t>(c)]);
    };
    const auto x = [&](std::size_t column) {
        return edge(plot.left, plot.right, column, map.columns, canvas.density());
    };
    const auto y = [&](std::size_t row) {
        return edge(plot.top, plot.bottom, row, map.rows, canvas.density());
    };
    // A light rim keeps the outline visible on cells of any colour.
    for (const Pen& pen : {Pen{.colour = with_alpha(palette::background, 0.8), .width = 3.6, .dashes = {}},
                           Pen{.colour = group.colour, .width = 1.8, .dashes = {}}})
        for (std::size_t row = 0; row < map.rows; ++row)
            for (std::size_t column = 0; column < map.columns; ++column) {
                if (!inside[row * map.columns + column]) continue;
                const Vec2 low{x(column), y(row)}, high{x(column + 1), y(row + 1)};
                if (!member(row, column, -1, 0)) canvas.line(low, {high.x(), low.y()}, pen);
                if (!member(row, column, 1, 0)) canvas.line({low.x(), high.y()}, high, pen);
                if (!member(row, column, 0, -1)) canvas.line(low, {low.x(), high.y()}, pen);
                if (!member(row, column, 0, 1)) canvas.line({high.x(), low.y()}, high, pen);
            }
}

/// Outlines the rectangle or rings the place, and writes the word where the plot has room.
void draw_mark(Canvas& canvas, const Frame& frame, const MapMark& mark) {
    const Vec2 low = frame.place({mark.low.x(), mark.high.y()}),
               high = frame.place({mark.high.x(), mark.low.y()});
    const PageBox box{low.x(), low.y(), high.x(), high.y()};
    const bool place = mark.low == mark.high;
    constexpr double ring = 6, gap = 4;
    for (const Pen& pen : {Pen{.colour = with_alpha(palette::background, 0.9), .width = 4.4, .dashes = {}},
                           Pen{.colour = palette::ink, .width = 1.8, .dashes = {}}}) {
        if (place)
            canvas.circle(box.centre(), ring, pen);
        else
            canvas.polyline(box.grown(2.2).corners(), pen, true);  // what is inside stays visible
    }
    const TextStyle style{.size = 12.5, .weight = Weight::semibold, .align = Align::centre};
    const FontHeights heights = font_heights(style.size);
    const PageBox around = box.grown((place ? ring : 0) + 2 * gap);
    const bool over = around.top - heights.ascent > frame.plot.top + gap;
    const double half = text_width(mark.text, style.size, style.weight) / 2 + 2 * gap;
    const double left = frame.plot.left + half, right = frame.plot.right - half;
    if (left > right) return;
    const Vec2 at{std::clamp(box.centre().x(), left, right),
                  std::min(over ? around.top : around.bottom + heights.capital,
                           frame.plot.bottom - heights.descent - gap)};
    canvas.fill_box(text_box(at, mark.text, style).grown(2), with_alpha(palette::background, 0.9));
    canvas.text(at, mark.text, style);
}

}  // namespace

Canvas draw(const HeatMap& map) {
    require_sound(map);
    FrameContent content{.heading = map.heading, .horizontal = map.horizontal, .vertical = map.vertical};
    content.colours = settle(map.colours, map.values);
    content.aspect = map.equal_units ? 1 : 0;
    const auto missing = [](double value) { return std::isnan(value); };
    for (const CellGroup& group : map.groups)
        if (!group.name.empty())
            content.legend.push_back(
                {.name = group.name, .colour = group.colour, .sign = LegendEntry::Sign::outline});
    if (std::any_of(map.values.begin(), map.values.end(), missing))
        content.legend.push_back(
            {.name = map.no_data, .colour = palette::no_data_line, .sign = LegendEntry::Sign::hatch});
    const auto [page, frame] = fit_page(map.size, content);
    Canvas canvas(page.width, page.height, page.density);
    const PageBox& plot = frame.plot;
    canvas.clip(plot);
    const auto x = [&](std::size_t column) {
        return edge(plot.left, plot.right, column, map.columns, page.density);
    };
    const auto y = [&](std::size_t row) { return edge(plot.top, plot.bottom, row, map.rows, page.density); };
    for (std::size_t row = 0; row < map.rows; ++row)
        for (std::size_t column = 0; column < map.columns; ++column) {
            const double value = map.values[row * map.columns + column];
            const PageBox cell{x(column), y(row), x(column + 1), y(row + 1)};
            if (!missing(value))
                canvas.fill_box(cell, content.colours->of(value));
            else
                fill_hatch(canvas, {cell.corners()});
        }
    for (const CellGroup& group : map.groups) draw_group(canvas, map, plot, group);
    for (const MapMark& mark : map.marks) draw_mark(canvas, frame, mark);
    canvas.clip(std::nullopt);
    draw_surround(canvas, frame);
    return canvas;
}

}  // namespace glint
