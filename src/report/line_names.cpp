// Names along lines and beside curves: candidates, crossings, moving apart.
#include "report/line_names.h"

#include <algorithm>
#include <cmath>

namespace glint {

namespace {

/// Does the stretch from `a` to `b` touch the box (Liang, Barsky 1984)?
bool crosses(const PageBox& box, const Vec2& a, const Vec2& b) {
    double enter = 0, leave = 1;
    const auto cut = [&](double from, double run, double low, double high) {
        if (run == 0) return from >= low && from <= high;
        const auto [first, second] = std::minmax({(low - from) / run, (high - from) / run});
        enter = std::max(enter, first);
        leave = std::min(leave, second);
        return enter <= leave;
    };
    return cut(a.x(), b.x() - a.x(), box.left, box.right) && cut(a.y(), b.y() - a.y(), box.top, box.bottom);
}

/// How many stretches of curves and reference lines run under the box.
int crossings(const LinePlot& plot, const Frame& frame, const PageBox& box) {
    int count = 0;
    for (const Curve& curve : plot.curves)
        for (std::size_t i = 0; i + 1 < curve.points.size(); ++i)
            if (drawn(curve.points[i]) && drawn(curve.points[i + 1]))
                count += crosses(box, frame.place(curve.points[i]), frame.place(curve.points[i + 1]));
    return count;
}

/// Moves names that are sorted by height as little as possible (least squares) so that they stand
/// `curve_name_height` apart: runs that touch move as one about their mean (pooled neighbours; Ayer and
/// others 1955). Then keeps them between the bounds.
void spread(std::vector<EndName>& names, double top, double bottom) {
    struct Run {
        double sum = 0;
        std::size_t count = 0;
        [[nodiscard]] double mean() const { return sum / static_cast<double>(count); }
    };
    std::vector<Run> runs;
    for (std::size_t i = 0; i < names.size(); ++i) {
        runs.push_back({.sum = names[i].height - curve_name_height * static_cast<double>(i), .count = 1});
        while (runs.size() > 1 && runs[runs.size() - 2].mean() > runs.back().mean()) {
            const Run last = runs.back();
            runs.pop_back();
            runs.back() = {.sum = runs.back().sum + last.sum, .count = runs.back().count + last.count};
        }
    }
    std::size_t next = 0;
    for (const Run& run : runs)
        for (std::size_t i = 0; i < run.count; ++i, ++next)
            names[next].height = run.mean() + curve_name_height * static_cast<double>(next);
    double free = top + curve_name_height / 2;
    for (EndName& name : names)
        name.height = std::max(name.height, free), free = name.height + curve_name_height;
    free = bottom - curve_name_height / 2;
    for (std::size_t i = names.size(); i-- > 0;)
        names[i].height = std::min(names[i].height, free), free = names[i].height - curve_name_height;
}

}  // namespace

bool drawn(const Vec2& point) { return !std::isnan(point.x()) && !std::isnan(point.y()); }

TextStyle style_of(const ReferenceLine& line) {
    const bool upward = line.across == ReferenceLine::Across::vertical;
    return {.size = 12,
            .colour = palette::quiet_ink,
            .align = Align::centre,
            .anchor = Anchor::middle,
            .reading = upward ? Reading::upward : Reading::across,
            .halo = 1.5};
}

std::pair<Vec2, Vec2> ends_of(const ReferenceLine& line, const Frame& frame) {
    const PageBox& box = frame.plot;
    if (line.across == ReferenceLine::Across::horizontal) {
        const double y = box.bottom - share_along(*frame.content.vertical, line.value) * box.height();
        return {{box.left, y}, {box.right, y}};
    }
    const double x = box.left + share_along(*frame.content.horizontal, line.value) * box.width();
    return {{x, box.bottom}, {x, box.top}};
}

std::vector<std::optional<Vec2>> reference_places(const LinePlot& plot, const Frame& frame) {
    std::vector<std::optional<Vec2>> places;
    std::vector<PageBox> taken;
    const std::vector<EndName> ends = end_names(plot, frame);
    for (const ReferenceLine& line : plot.references) {
        const TextStyle style = style_of(line);
        const auto [from, to] = ends_of(line, frame);
        const Vec2 along = (to - from).normalized(), side{along.y(), -along.x()};
        const double half = text_width(line.name, style.size) / 2 + 8, length = (to - from).norm();
        std::optional<Vec2> best;
        int least = 1 << 30;
        for (int step = 0; step <= 12; ++step)
            for (const double away : {9.5, -9.5}) {
                // From the far end: curves tend to bunch where they begin.
                const double at = length - half - (length - 2 * half) * step / 12;
                const Vec2 place = from + along * at + side * away;
                const PageBox box = text_box(place, line.name, style).grown(1);
                const auto hit = [&](const PageBox& other) { return other.overlaps(box); };
                if (length < 2 * half || !frame.plot.holds(box) ||
                    std::any_of(taken.begin(), taken.end(), hit))
                    continue;
                int count = crossings(plot, frame, box);
                for (const ReferenceLine& other : plot.references)
                    count += crosses(box, ends_of(other, frame).first, ends_of(other, frame).second);
                // Lines that lead to names beside the plot.
                for (const EndName& name : ends)
                    count += crosses(box, name.end, {frame.plot.right, name.height});
                if (count < least) least = count, best = place;
            }
        places.push_back(best);
        if (best) taken.push_back(text_box(*best, line.name, style).grown(1));
    }
    return places;
}

std::vector<EndName> end_names(const LinePlot& plot, const Frame& frame) {
    std::vector<EndName> names;
    for (std::size_t i = 0; i < plot.curves.size(); ++i) {
        const std::vector<Vec2>& points = plot.curves[i].points;
        const auto last = std::find_if(points.rbegin(), points.rend(), [&](const Vec2& point) {
            return drawn(point) &&
                   frame.plot.grown(1).holds({frame.place(point).x(), frame.place(point).y(),
                                              frame.place(point).x(), frame.place(point).y()});
        });
        if (plot.curves[i].name.empty() || last == points.rend()) continue;
        names.push_back({.curve = i, .end = frame.place(*last), .height = frame.place(*last).y()});
    }
    std::stable_sort(names.begin(), names.end(),
                     [](const EndName& a, const EndName& b) { return a.height < b.height; });
    spread(names, frame.plot.top, frame.plot.bottom);
    return names;
}

}  // namespace glint
