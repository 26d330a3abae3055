// The convex hull of points.
#include "report/hull.h"

#include <algorithm>

namespace glint {

std::vector<Vec2> convex_hull_of(std::vector<Vec2> points) {
    std::ranges::sort(
        points, [](const Vec2& a, const Vec2& b) { return a.x() != b.x() ? a.x() < b.x() : a.y() < b.y(); });
    const auto left_turn = [](const Vec2& a, const Vec2& b, const Vec2& c) {
        return (b.x() - a.x()) * (c.y() - a.y()) - (b.y() - a.y()) * (c.x() - a.x()) > 0;
    };
    // The lower side from the left to the right, then the upper side back.
    std::vector<Vec2> hull;
    for (const int side : {0, 1}) {
        const std::size_t base = hull.size();
        for (const Vec2& p : points) {
            while (hull.size() >= base + 2 && !left_turn(hull[hull.size() - 2], hull.back(), p))
                hull.pop_back();
            hull.push_back(p);
        }
        if (!hull.empty()) hull.pop_back();  // starts the other side
        if (side == 0) std::ranges::reverse(points);
    }
    return hull;
}

}  // namespace glint
