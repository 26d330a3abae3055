// Nearest neighbours by a k-d tree, and the plane through them.
#include "report/neighbours.h"

#include <glint/core/parallel.h>

#include <Eigen/Eigenvalues>
#include <algorithm>
#include <array>
#include <cmath>
#include <numeric>

namespace glint {

namespace {

constexpr std::size_t wanted = 21;  // the point itself and 20 more
constexpr std::size_t leaf_size = 16;

/// Points in the order of a balanced k-d tree: every range is split at its middle element along `axis`, until
/// it is no longer than a leaf.
struct Tree {
    std::span<const Vec3> points;
    std::vector<std::uint32_t> order;
    std::vector<std::uint8_t> axis;  ///< of the split at each middle element
};

void build(Tree& tree, std::size_t first, std::size_t last) {
    if (last - first <= leaf_size) return;
    Vec3 low = tree.points[tree.order[first]], high = low;
    for (std::size_t i = first; i < last; ++i) {
        low = low.cwiseMin(tree.points[tree.order[i]]);
        high = high.cwiseMax(tree.points[tree.order[i]]);
    }
    int axis = 0;
    (high - low).maxCoeff(&axis);
    const std::size_t middle = (first + last) / 2;
    const auto at = [&](std::size_t i) { return tree.order.begin() + static_cast<std::ptrdiff_t>(i); };
    // Equal coordinates go by index, so that the tree is the same whatever the library's selection does.
    std::nth_element(at(first), at(middle), at(last), [&](std::uint32_t a, std::uint32_t b) {
        const double p = tree.points[a][axis], q = tree.points[b][axis];
        return p != q ? p < q : a < b;
    });
    tree.axis[middle] = static_cast<std::uint8_t>(axis);
    build(tree, first, middle);
    build(tree, middle + 1, last);
}

/// The nearest points so far, nearest first.
struct Nearest {
    struct Item {
        double squared = 0;
        std::uint32_t index = 0;
    };
    std::array<Item, wanted> items;
    std::size_t count = 0;

    [[nodiscard]] double reach() const { return count < wanted ? INFINITY : items[wanted - 1].squared; }
    void offer(double squared, std::uint32_t index) {
        if (!(squared < reach())) return;
        std::size_t place = count < wanted ? count++ : wanted - 1;
        for (; place > 0 && items[place - 1].squared > squared; --place) items[place] = items[place - 1];
        items[place] = {.squared = squared, .index = index};
    }
};

void search(const Tree& tree, std::size_t first, std::size_t last, const Vec3& target, Nearest& nearest) {
    const auto visit = [&](std::size_t i) {
        nearest.offer((tree.points[tree.order[i]] - target).squaredNorm(), tree.order[i]);
    };
    if (last - first <= leaf_size) {
        for (std::size_t i = first; i < last; ++i) visit(i);
        return;
    }
    const std::size_t middle = (first + last) / 2;
    const int axis = tree.axis[middle];
    const double offset = target[axis] - tree.points[tree.order[middle]][axis];
    visit(middle);
    if (offset < 0)
        search(tree, first, middle, target, nearest);
    else
        search(tree, middle + 1, last, target, nearest);
    if (offset * offset >= nearest.reach()) return;
    if (offset < 0)
        search(tree, middle + 1, last, target, nearest);
    else
        search(tree, first, middle, target, nearest);
}

LocalSurface surface_through(const Tree& tree, const Nearest& nearest) {
    LocalSurface surface;
    if (nearest.count < 2) return surface;
    surface.spacing = std::sqrt(nearest.items[std::min<std::size_t>(6, nearest.count - 1)].squared);
    surface.closest = std::sqrt(nearest.items[std::min<std::size_t>(3, nearest.count - 1)].squared);
    if (nearest.count < 7) return surface;

    Vec3 mean = Vec3::Zero();
    for (std::size_t i = 0; i < nearest.count; ++i) mean += tree.points[nearest.items[i].index];
    mean /= static_cast<double>(nearest.count);
    Mat3 spread = Mat3::Zero();
    for (std::size_t i = 0; i < nearest.count; ++i) {
        const Vec3 offset = tree.points[nearest.items[i].index] - mean;
        spread += offset * offset.transpose();
    }
    const Eigen::SelfAdjointEigenSolver<Mat3> solver(spread);
    surface.normal = solver.eigenvectors().col(0);
    // Thin across, and not a mere line: the second spread must be a fair part of the largest.
    const Vec3 spreads = solver.eigenvalues();
    surface.flat = spreads[0] < 0.1 * spreads[1] && spreads[1] > 0.003 * spreads[2];
    return surface;
}

/// A point at the edge of two surfaces sees both and so no plane of its own; it takes that of the flat
/// neighbour whose plane it lies closest to.
LocalSurface with_neighbours_plane(LocalSurface surface, std::span<const LocalSurface> all,
                                   std::span<const Vec3> points, const Nearest& nearest) {
    double best = 0.35 * surface.spacing;
    for (std::size_t i = 1; i < nearest.count && i <= 12; ++i) {
        const LocalSurface& other = all[nearest.items[i].index];
        if (!other.flat) continue;
        const double away =
            std::abs(other.normal.dot(points[nearest.items[i].index] - points[nearest.items[0].index]));
        if (away >= best) continue;
        best = away;
        surface.normal = other.normal;
        surface.flat = true;
    }
    return surface;
}

}  // namespace

std::vector<LocalSurface> local_surfaces(std::span<const Vec3> points) {
    Tree tree{.points = points,
              .order = std::vector<std::uint32_t>(points.size()),
              .axis = std::vector<std::uint8_t>(points.size())};
    std::iota(tree.order.begin(), tree.order.end(), 0u);
    build(tree, 0, points.size());
    std::vector<LocalSurface> surfaces(points.size());
    std::vector<Nearest> nearest(points.size());
    parallel_for(points.size(), [&](std::size_t i) {
        search(tree, 0, points.size(), points[i], nearest[i]);
        surfaces[i] = surface_through(tree, nearest[i]);
    });
    // A point at a border has neighbours on one side only; the median over its surroundings forgets that.
    const auto usual_spacing = [&](std::size_t i) {
        std::vector<double> spacings;
        for (std::size_t k = 0; k < std::min<std::size_t>(nearest[i].count, 9); ++k)
            spacings.push_back(surfaces[nearest[i].items[k].index].spacing);
        std::sort(spacings.begin(), spacings.end());
        return spacings[spacings.size() / 2];
    };
    std::vector<LocalSurface> settled(points.size());
    parallel_for(points.size(), [&](std::size_t i) {
        settled[i] =
            surfaces[i].flat ? surfaces[i] : with_neighbours_plane(surfaces[i], surfaces, points, nearest[i]);
        settled[i].spacing = usual_spacing(i);
    });
    return settled;
}

}  // namespace glint
