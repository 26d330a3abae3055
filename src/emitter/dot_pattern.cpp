// How well a scattered layout serves as a pattern of projected dots.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/quantity.h>
#include <glint/emitter/dot_pattern.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>

namespace glint {
namespace {

struct Rectangle {
    Vec2 low, high;

    [[nodiscard]] bool holds(const Vec2& p) const {
        return (p.array() >= low.array()).all() && (p.array() <= high.array()).all();
    }
};

Rectangle bounds_of(const std::vector<Vec2>& dots) {
    Rectangle bounds{dots.front(), dots.front()};
    for (const Vec2& p : dots) bounds = {bounds.low.cwiseMin(p), bounds.high.cwiseMax(p)};
    return bounds;
}

// Dots sorted into square cells, about one a cell.
struct Cells {
    const std::vector<Vec2>& dots;
    Vec2 low;
    double side = 1;
    int columns = 1, rows = 1;
    std::vector<int> first;    // [cells + 1] where each cell starts in `members`
    std::vector<int> members;  // [n]

    explicit Cells(const std::vector<Vec2>& all) : dots(all), low(bounds_of(all).low) {
        const Vec2 size = bounds_of(all).high - low;
        const double n = static_cast<double>(dots.size());
        // The second keeps dots that are nearly on one line from needing more cells than dots.
        if (size.maxCoeff() > 0) side = std::max(std::sqrt(size.x() / n * size.y()), size.maxCoeff() / n);
        columns = static_cast<int>(size.x() / side) + 1, rows = static_cast<int>(size.y() / side) + 1;
        first.assign(static_cast<std::size_t>(columns) * rows + 1, 0);
        const auto cell_of = [&](const Vec2& p) {
            return static_cast<std::size_t>(row(p.y())) * columns + column(p.x());
        };
        for (const Vec2& p : dots) ++first[cell_of(p) + 1];
        for (std::size_t cell = 1; cell < first.size(); ++cell) first[cell] += first[cell - 1];
        std::vector<int> next(first.begin(), first.end() - 1);
        members.resize(dots.size());
        for (std::size_t i = 0; i < dots.size(); ++i) members[next[cell_of(dots[i])]++] = static_cast<int>(i);
    }

    // Cut as doubles: a rectangle may reach to infinity.
    [[nodiscard]] int column(double x) const {
        return static_cast<int>(std::clamp((x - low.x()) / side, 0.0, columns - 1.0));
    }
    [[nodiscard]] int row(double y) const {
        return static_cast<int>(std::clamp((y - low.y()) / side, 0.0, rows - 1.0));
    }

    // Visits every dot of the rectangle, and others near it.
    void for_each_near(const Rectangle& rectangle, auto&& visit) const {
        const int left = column(rectangle.low.x()), right = column(rectangle.high.x());
        for (int r = row(rectangle.low.y()); r <= row(rectangle.high.y()); ++r) {
            const std::size_t start = static_cast<std::size_t>(r) * columns;
            for (int k = first[start + left]; k < first[start + right + 1]; ++k) visit(members[k]);
        }
    }
};

// Distance from each dot to the nearest other.
std::vector<double> nearest_distances(const Cells& cells) {
    std::vector<double> distances;
    if (cells.dots.size() < 2) return distances;
    for (std::size_t i = 0; i < cells.dots.size(); ++i) {
        const Vec2& dot = cells.dots[i];
        double nearest = std::numeric_limits<double>::infinity();
        // A square holds whatever is nearer than half its side.
        for (double half = cells.side; !(nearest <= half / 2); half *= 2)
            cells.for_each_near({dot.array() - half, dot.array() + half}, [&](int other) {
                if (other != static_cast<int>(i))
                    nearest = std::min(nearest, (cells.dots[other] - dot).norm());
            });
        distances.push_back(nearest);
    }
    return distances;
}

double inner_density(const std::vector<Vec2>& positions) {
    const auto [low, high] = bounds_of(positions);
    const Vec2 middle = (low + high) / 2, size = high - low;
    if (size.minCoeff() <= 0) return 0;
    double weights = 0;
    for (const Vec2& p : positions) {
        const Vec2 share = (p - middle).cwiseQuotient(size);
        const double u = std::cos(pi * share.x()), v = std::cos(pi * share.y());
        weights += (u * u) * (v * v);
    }
    return weights / (size.prod() / 4);  // the mean of cos2 is a half, each way
}

// Greatest correlation of each dot's neighbourhood with any other on its line. In coordinates along and
// across the line.
std::vector<double> worst_correlations(const Cells& cells, const DotSearch& search) {
    const std::vector<Vec2>& dots = cells.dots;
    const Vec2 half = Vec2(search.window_width, search.window_height) / 2;
    const Rectangle window{-half, half};
    const Vec2 reach(search.search_length, search.tolerance);
    // A little more than the tolerance, so that rounding leaves out no dot that is within it.
    const double sure = search.tolerance * (1 + 1e-6);
    const auto neighbours = [&](const Vec2& dot, auto&& visit) {
        cells.for_each_near({dot - half * (1 + 1e-6), dot + half * (1 + 1e-6)}, [&](int other) {
            if (const Vec2 offset = dots[other] - dot; window.holds(offset)) visit(offset);
        });
    };
    std::vector<int> counts(dots.size(), 0);
    for (std::size_t i = 0; i < dots.size(); ++i) neighbours(dots[i], [&](const Vec2&) { ++counts[i]; });

    std::vector<double> worst(dots.size(), 0);
    std::vector<Vec2> offsets;
    for (std::size_t i = 0; i < dots.size(); ++i) {
        offsets.clear();
        neighbours(dots[i], [&](const Vec2& offset) { offsets.push_back(offset); });
        cells.for_each_near({dots[i] - reach * (1 + 1e-6), dots[i] + reach * (1 + 1e-6)}, [&](int other) {
            const std::size_t j = static_cast<std::size_t>(other);
            const Vec2 apart = (dots[j] - dots[i]).cwiseAbs();
            if (j <= i || apart.x() > search.search_length || apart.y() > search.tolerance) return;
            const double mean = std::sqrt(static_cast<double>(counts[i]) * counts[j]);
            // No more can coincide than the smaller one has.
            if (std::min(counts[i], counts[j]) / mean <= std::min(worst[i], worst[j])) return;
            int same = 0;
            for (const Vec2& offset : offsets) {
                const Vec2 place = dots[j] + offset;
                bool found = false;
                cells.for_each_near({place.array() - sure, place.array() + sure}, [&](int near) {
                    const Vec2 there = dots[near] - dots[j];
                    found = found || (window.holds(there) && (there - offset).norm() <= search.tolerance);
                });
                same += found;
            }
            worst[i] = std::max(worst[i], same / mean), worst[j] = std::max(worst[j], same / mean);
        });
    }
    return worst;
}

void require_sound(const DotSearch& search, double nearest) {
    if (!(search.window_width > 0 && search.window_height > 0))
        throw Error(Problem{.what = "the window of a neighbourhood has no area",
                            .accepted = "a width and a height above 0"});
    if (!(std::abs(search.line.norm() - 1) < 1e-6))
        throw Error(Problem{.what = "the direction of the epipolar line has not the length 1",
                            .accepted = "a unit vector"});
    // Two dots closer together could both be the same as a third.
    if (!(search.tolerance > 0 && search.tolerance < nearest / 2))
        throw Error(Problem{.what = fmt::format("a tolerance of {} finds no dot again, or takes two for one",
                                                show_quantity(search.tolerance, Kind::length)),
                            .accepted = std::isfinite(nearest)
                                            ? fmt::format("above 0 and below half the smallest spacing, {}",
                                                          show_quantity(nearest / 2, Kind::length))
                                            : "above 0"});
}

}  // namespace

DotPattern judge_dots(const std::vector<Vec2>& positions, const DotSearch& search) {
    DotPattern pattern;
    if (positions.empty()) {
        require_sound(search, std::numeric_limits<double>::infinity());
        return pattern;
    }
    std::vector<Vec2> along_line;
    const Vec2 across(-search.line.y(), search.line.x());
    for (const Vec2& p : positions) along_line.emplace_back(search.line.dot(p), across.dot(p));
    const Cells cells(along_line);
    const std::vector<double> distances = nearest_distances(cells);
    const double count = static_cast<double>(positions.size());
    for (const double distance : distances) pattern.mean_nearest += distance / count;
    if (!distances.empty()) pattern.nearest = *std::ranges::min_element(distances);
    require_sound(search, distances.empty() ? std::numeric_limits<double>::infinity() : pattern.nearest);
    pattern.density = inner_density(positions);
    pattern.share_of_hexagonal = pattern.density * pattern.nearest * pattern.nearest * std::sqrt(3.0) / 2;
    const std::vector<double> worst = worst_correlations(cells, search);
    const auto unique = [&](double correlation) { return correlation < search.unique_below; };
    pattern.uniqueness = static_cast<double>(std::ranges::count_if(worst, unique)) / count;
    pattern.worst_correlation = *std::ranges::max_element(worst);
    return pattern;
}

}  // namespace glint
