// Curves on linear or logarithmic axes: ranges, names, lines.
#include <glint/core/error.h>
#include <glint/report/line_plot.h>

#include "report/line_names.h"

#include <fmt/format.h>
#include <algorithm>
#include <cmath>

namespace glint {

namespace {

constexpr double name_gap = 8, leader = 12;

using Across = ReferenceLine::Across;

Colour colour_of(const LinePlot& plot, std::size_t curve) {
    return plot.curves[curve].colour.value_or(palette::categories[curve % palette::categories.size()]);
}

/// The colours come round again after eight curves, then with dashes.
bool broken(const LinePlot& plot, std::size_t curve) {
    const bool second_round = curve / palette::categories.size() % 2 == 1;
    return plot.curves[curve].dashed || (second_round && !plot.curves[curve].colour);
}

void require_value(double value, const Axis& axis, const std::string& owner) {
    const bool positive = axis.spacing == Spacing::logarithmic;
    if (std::isfinite(value) && (!positive || value > 0)) return;
    throw Error(
        Problem{.what = fmt::format("'{}' has the value {} on the axis '{}'", owner, value, axis.label),
                .accepted = positive ? "finite values above 0" : "finite values"});
}

void require_sound(const LinePlot& plot) {
    for (const Curve& curve : plot.curves)
        for (const Vec2& point : curve.points) {
            if (!drawn(point)) continue;
            require_value(point.x(), plot.horizontal, curve.name);
            require_value(point.y(), plot.vertical, curve.name);
        }
    for (const ReferenceLine& line : plot.references)
        require_value(line.value, line.across == Across::horizontal ? plot.vertical : plot.horizontal,
                      line.name);
}

/// Range of one coordinate of all points and reference lines. The margin of 4 % is left out across when only
/// lines are drawn, so that they run from side to side, and never leads from positive values to below zero.
AxisRange fitted_range(const LinePlot& plot, int coordinate, bool logarithmic) {
    double low = 1e300, high = -1e300;
    bool marked = false;
    const auto see = [&](double value) { low = std::min(low, value), high = std::max(high, value); };
    for (const Curve& curve : plot.curves) {
        marked = marked || curve.markers || !curve.line;
        for (const Vec2& point : curve.points)
            if (drawn(point)) see(point[coordinate]);
    }
    for (const ReferenceLine& line : plot.references)
        if ((line.across == Across::horizontal) == (coordinate == 1)) see(line.value);
    if (low > high)
        throw Error(
            Problem{.what = "a plot has no point to take its range from", .accepted = "at least one point"});
    const double share = coordinate == 0 && !marked && high > low ? 0 : 0.04;
    if (logarithmic) {
        const double rim = high > low ? std::pow(high / low, share) : 2;
        return {low / rim, high * rim};
    }
    const double rim = high > low ? share * (high - low) : std::max(1.0, std::abs(low)) / 10;
    return {low >= 0 ? std::max(0.0, low - rim) : low - rim, high + rim};
}

/// Names stand beside the plot when they are few, fit, and every curve runs up to its right side.
bool named_at_ends(const LinePlot& plot, const Frame& frame) {
    if (plot.naming == LinePlot::Naming::legend) return false;
    const std::vector<EndName> names = end_names(plot, frame);
    const auto named =
        std::count_if(plot.curves.begin(), plot.curves.end(), [](const Curve& c) { return !c.name.empty(); });
    const bool fits = static_cast<double>(names.size()) * curve_name_height <= frame.plot.height() &&
                      named == static_cast<std::ptrdiff_t>(names.size());
    if (plot.naming == LinePlot::Naming::at_ends) return fits;
    return fits && names.size() <= 8 && std::all_of(names.begin(), names.end(), [&](const EndName& name) {
               return name.end.x() > frame.plot.left + 0.85 * frame.plot.width();
           });
}

double widest_name(const LinePlot& plot) {
    double width = 0;
    for (const Curve& curve : plot.curves)
        width = std::max(width, text_width(curve.name, curve_name_style.size, curve_name_style.weight));
    return width;
}

/// The frame, and which names stand beside the plot and along the lines.
struct Arrangement {
    Frame frame;
    bool at_ends = false;
    std::vector<std::optional<Vec2>> reference_names;
};

std::vector<LegendEntry> curve_legend(const LinePlot& plot) {
    std::vector<LegendEntry> legend;
    for (std::size_t i = 0; i < plot.curves.size(); ++i) {
        const Curve& curve = plot.curves[i];
        if (curve.name.empty()) continue;
        const LegendEntry::Sign sign = !curve.line       ? LegendEntry::Sign::disc
                                       : broken(plot, i) ? LegendEntry::Sign::dashed
                                                         : LegendEntry::Sign::line;
        legend.push_back({.name = curve.name, .colour = colour_of(plot, i), .sign = sign});
    }
    return legend;
}

Arrangement arrange(const LinePlot& plot) {
    FrameContent content{.heading = plot.heading, .horizontal = plot.horizontal, .vertical = plot.vertical};
    if (plot.fit_horizontal)
        content.horizontal->range = fitted_range(plot, 0, plot.horizontal.spacing == Spacing::logarithmic);
    if (plot.fit_vertical)
        content.vertical->range = fitted_range(plot, 1, plot.vertical.spacing == Spacing::logarithmic);
    const PageBox page{0, 0, plot.size.width, plot.size.height};
    Arrangement result{.frame = lay_out(page, content)};
    const double names = widest_name(plot), room = names + name_gap + leader;
    result.at_ends = names > 0 && room < 0.3 * page.width() && named_at_ends(plot, result.frame);
    if (result.at_ends)
        content.right_room = room;
    else
        content.legend = curve_legend(plot);
    // A name that finds no place joins the legend, which may take the place of another: again, until all
    // stand.
    std::vector<bool> listed(plot.references.size(), false);
    for (bool again = true; again;) {
        again = false;
        result.frame = lay_out(page, content);
        result.reference_names = reference_places(plot, result.frame);
        for (std::size_t i = 0; i < listed.size(); ++i) {
            if (listed[i]) result.reference_names[i].reset();
            if (result.reference_names[i] || listed[i] || plot.references[i].name.empty()) continue;
            listed[i] = again = true;
            content.legend.push_back({.name = plot.references[i].name,
                                      .colour = palette::quiet_ink,
                                      .sign = LegendEntry::Sign::dashed});
        }
        if (!result.at_ends || named_at_ends(plot, result.frame)) continue;
        result.at_ends = false;
        again = true;
        content.right_room = 0;
        for (const LegendEntry& entry : curve_legend(plot)) content.legend.push_back(entry);
    }
    return result;
}

void draw_curve(Canvas& canvas, const Curve& curve, const Frame& frame, const Colour& colour, bool dashed) {
    Pen pen{.colour = colour, .width = 2.2, .cap = dashed ? Cap::butt : Cap::round, .dashes = {}};
    if (dashed) pen.dashes = {7, 4};
    std::vector<Vec2> run;
    const auto finish = [&] {
        if (curve.line && run.size() > 1) canvas.polyline(run, pen);
        if (curve.markers || !curve.line || run.size() == 1)
            for (const Vec2& point : run) canvas.fill_disc(point, 3.2, colour);
        run.clear();
    };
    for (const Vec2& point : curve.points)
        if (drawn(point))
            run.push_back(frame.place(point));
        else
            finish();
    finish();
}

}  // namespace

Canvas draw(const LinePlot& plot) {
    require_sound(plot);
    const auto [frame, at_ends, places] = arrange(plot);
    Canvas canvas(plot.size.width, plot.size.height, plot.size.density);
    draw_ground(canvas, frame);
    canvas.clip(frame.plot.grown(1.5));
    for (const ReferenceLine& line : plot.references)
        canvas.line(ends_of(line, frame).first, ends_of(line, frame).second,
                    {.colour = palette::quiet_ink, .width = 1.3, .cap = Cap::butt, .dashes = {5, 3.5}});
    for (std::size_t i = 0; i < plot.curves.size(); ++i)
        draw_curve(canvas, plot.curves[i], frame, colour_of(plot, i), broken(plot, i));
    canvas.clip(std::nullopt);
    for (std::size_t i = 0; i < plot.references.size(); ++i)
        if (places[i]) canvas.text(*places[i], plot.references[i].name, style_of(plot.references[i]));
    draw_surround(canvas, frame);
    for (const EndName& name : at_ends ? end_names(plot, frame) : std::vector<EndName>{}) {
        TextStyle style = curve_name_style;
        style.colour = colour_of(plot, name.curve);
        const double start = frame.plot.right + name_gap;
        if (std::abs(name.height - name.end.y()) > 2)
            canvas.polyline(std::vector<Vec2>{{name.end.x() + 3, name.end.y()}, {start + 8, name.height}},
                            {.colour = with_alpha(style.colour, 0.6), .width = 1, .dashes = {}});
        canvas.text({start + leader, name.height}, plot.curves[name.curve].name, style);
    }
    return canvas;
}

}  // namespace glint
