// Exact area coverage: every edge adds the area to its right, row by row.
#include <glint/report/coverage.h>

#include <algorithm>
#include <cmath>

namespace glint {

namespace {

/// Sums of signed area differences; column `width` takes what lies right of the window.
struct Sums {
    int width = 0, height = 0;
    std::vector<float> value;

    void add(int column, int row, double amount) {
        value[static_cast<std::size_t>(row) * (width + 2) + column] += static_cast<float>(amount);
    }
};

/// A piece of edge within one row and between x = 0 and x = width. A piece within one pixel column covers the
/// rest of its row to the right, and of its own pixel the part right of its middle.
void add_in_row(Sums& sums, int row, double x0, double x1, double height) {
    if (x0 > x1) std::swap(x0, x1);
    const double per_x = x1 > x0 ? height / (x1 - x0) : 0;
    int column = std::min(static_cast<int>(x0), sums.width);
    for (double x = x0;; ++column) {
        const double end = std::min<double>(x1, column + 1);
        const double part = end >= x1 ? height - per_x * (x - x0) : per_x * (end - x);
        const double left_share = (x + end) / 2 - column;
        sums.add(column, row, part * (1 - left_share));
        sums.add(column + 1, row, part * left_share);
        if (end >= x1 || column >= sums.width) break;
        x = end;
    }
}

/// An edge with both ends between x = 0 and x = width, cut into rows.
void add_inside(Sums& sums, Vec2 from, Vec2 to) {
    if (from.y() == to.y()) return;
    const double sign = from.y() < to.y() ? 1 : -1;
    if (sign < 0) std::swap(from, to);
    const double slope = (to.x() - from.x()) / (to.y() - from.y());
    const double low = std::min(from.x(), to.x()), high = std::max(from.x(), to.x());
    const auto x_at = [&](double y) { return std::clamp(from.x() + slope * (y - from.y()), low, high); };
    const double top = std::max(from.y(), 0.0), bottom = std::min<double>(to.y(), sums.height);
    for (int row = static_cast<int>(top); row < bottom; ++row) {
        const double y0 = std::max<double>(top, row), y1 = std::min<double>(bottom, row + 1);
        add_in_row(sums, row, x_at(y0), x_at(y1), sign * (y1 - y0));
    }
}

/// Any edge: parts left of the window act as if they stood on its left side, parts right of it add nothing
/// seen.
void add_edge(Sums& sums, const Vec2& from, const Vec2& to) {
    const double width = sums.width, run = to.x() - from.x();
    const auto crossing = [&](double side) {
        return run == 0 ? 0.0 : std::clamp((side - from.x()) / run, 0.0, 1.0);
    };
    const auto [first, second] = std::minmax({crossing(0), crossing(width)});
    const auto at = [&](double share) -> Vec2 {
        const Vec2 point = from + share * (to - from);
        return {std::clamp(point.x(), 0.0, width), point.y()};
    };
    add_inside(sums, at(0), at(first));
    add_inside(sums, at(first), at(second));
    add_inside(sums, at(second), at(1));
}

PixelWindow narrowed(std::span<const std::vector<Vec2>> rings, const PixelWindow& window) {
    Vec2 low{1e9, 1e9}, high{-1e9, -1e9};
    for (const std::vector<Vec2>& ring : rings)
        for (const Vec2& corner : ring) low = low.cwiseMin(corner), high = high.cwiseMax(corner);
    const auto cut = [](double value, int first, int last) {
        return static_cast<int>(std::clamp<double>(value, first, std::max(first, last)));
    };
    return {.left = cut(std::floor(low.x()), window.left, window.right),
            .top = cut(std::floor(low.y()), window.top, window.bottom),
            .right = cut(std::ceil(high.x()), window.left, window.right),
            .bottom = cut(std::ceil(high.y()), window.top, window.bottom)};
}

}  // namespace

Coverage cover(std::span<const std::vector<Vec2>> rings, const PixelWindow& window) {
    Coverage coverage{.window = narrowed(rings, window), .share = {}};
    const PixelWindow& narrow = coverage.window;
    if (narrow.width() == 0 || narrow.height() == 0) return coverage;
    Sums sums{.width = narrow.width(), .height = narrow.height(), .value = {}};
    sums.value.assign(static_cast<std::size_t>(sums.width + 2) * sums.height, 0.0f);
    const Vec2 origin(narrow.left, narrow.top);
    for (const std::vector<Vec2>& ring : rings)
        for (std::size_t i = 0; i < ring.size(); ++i)
            add_edge(sums, ring[i] - origin, ring[(i + 1) % ring.size()] - origin);
    coverage.share.resize(static_cast<std::size_t>(sums.width) * sums.height);
    for (int row = 0; row < sums.height; ++row) {
        double sum = 0;
        for (int column = 0; column < sums.width; ++column) {
            sum += sums.value[static_cast<std::size_t>(row) * (sums.width + 2) + column];
            coverage.share[static_cast<std::size_t>(row) * sums.width + column] =
                static_cast<float>(std::min(std::abs(sum), 1.0));
        }
    }
    return coverage;
}

}  // namespace glint
