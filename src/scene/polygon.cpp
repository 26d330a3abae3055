// Cutting polygons into triangles.
#include <glint/core/vector.h>
#include <glint/scene/polygon.h>

#include <Eigen/Geometry>
#include <cmath>
#include <numeric>

namespace glint {
namespace {

// Twice the area vector (Newell's method), from the first corner to keep the rounding small.
Vec3 area_vector(std::span<const Vec3> corners) {
    Vec3 sum = Vec3::Zero();
    for (std::size_t i = 1; i + 1 < corners.size(); ++i)
        sum += (corners[i] - corners[0]).cross(corners[i + 1] - corners[0]);
    return sum;
}

// The corners in the plane across the area vector; the outline runs counter-clockwise there.
std::vector<Vec2> flattened(std::span<const Vec3> corners, const Vec3& area) {
    const Vec3 normal = area.normalized();
    int shortest = 0;
    normal.cwiseAbs().minCoeff(&shortest);
    const Vec3 u = normal.cross(Vec3::Unit(shortest)).normalized(), v = normal.cross(u);
    std::vector<Vec2> flat;
    flat.reserve(corners.size());
    for (const Vec3& corner : corners)
        flat.emplace_back((corner - corners[0]).dot(u), (corner - corners[0]).dot(v));
    return flat;
}

double turn(const Vec2& a, const Vec2& b, const Vec2& c) {
    return (b.x() - a.x()) * (c.y() - a.y()) - (b.y() - a.y()) * (c.x() - a.x());
}

bool inside(const Vec2& p, const Vec2& a, const Vec2& b, const Vec2& c) {
    return turn(a, b, p) >= 0 && turn(b, c, p) >= 0 && turn(c, a, p) >= 0;
}

}  // namespace

std::vector<std::array<int, 3>> cut_polygon(std::span<const Vec3> corners) {
    if (corners.size() < 3) return {};
    const Vec3 area = area_vector(corners);
    double reach = 0;
    for (const Vec3& corner : corners) reach = std::max(reach, (corner - corners[0]).squaredNorm());
    const double rounding = 1e-12 * reach;  // of an area; far above the error of a few corners
    if (!(area.norm() > rounding)) return {};
    const std::vector<Vec2> flat = flattened(corners, area);

    std::vector<int> rest(corners.size());
    std::iota(rest.begin(), rest.end(), 0);
    std::vector<std::array<int, 3>> triangles;
    const auto is_ear = [&](std::size_t i) {
        const std::size_t n = rest.size();
        const Vec2 &a = flat[rest[(i + n - 1) % n]], &b = flat[rest[i]], &c = flat[rest[(i + 1) % n]];
        if (turn(a, b, c) < 0) return false;
        for (std::size_t k = 2; k + 1 < n; ++k) {
            const Vec2& p = flat[rest[(i + k) % n]];
            // A corner at the same place as one of the ear's, as at the ends of a slit, does not block it.
            if (p != a && p != b && p != c && inside(p, a, b, c)) return false;
        }
        return true;
    };
    while (rest.size() > 3) {
        std::size_t ear = 0;
        while (ear < rest.size() && !is_ear(ear)) ++ear;
        if (ear == rest.size()) return {};
        const std::size_t n = rest.size();
        triangles.push_back({rest[(ear + n - 1) % n], rest[ear], rest[(ear + 1) % n]});
        rest.erase(rest.begin() + static_cast<std::ptrdiff_t>(ear));
    }
    if (turn(flat[rest[0]], flat[rest[1]], flat[rest[2]]) < -rounding) return {};
    triangles.push_back({rest[0], rest[1], rest[2]});
    return triangles;
}

}  // namespace glint
