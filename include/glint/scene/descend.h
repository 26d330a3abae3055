// Walking a ray down a bounding hierarchy, nearest nodes first.
#pragma once

#include <glint/scene/hierarchy.h>
#include <glint/scene/ray.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

namespace glint {

/// Calls leaf(first, count, far) for the leaves a ray may meet, nearest bounds first; the leaf returns the
/// distance beyond which nothing matters any more (the `far` it got, or less; -infinity ends the walk).
/// Returns the number of nodes whose bounds were tested. The ray must be finite (far may be infinite).
///
/// Bounds are widened by 32 roundings of the largest coordinate in play, tree and origin together. That is
/// above the errors of the slab test itself (Ize 2013, J. Comput. Graph. Tech. 2(2)) and of the tests of the
/// items inside, so that no item that would be hit is passed over.
template <class Leaf>
int descend(const Hierarchy& hierarchy, const Ray& ray, Leaf&& leaf) {
    if (hierarchy.nodes.empty()) return 0;
    const double widening =
        32 * std::numeric_limits<double>::epsilon() * (hierarchy.extent + ray.origin.cwiseAbs().maxCoeff());
    const Vec3 above = ray.origin.array() + widening, below = ray.origin.array() - widening;
    // A direction of 0 has an infinite inverse. The widening keeps the origin off the planes of the bounds,
    // so that 0 * infinity does not arise; but where all coordinates are 0, and there min and max pass over
    // it.
    const Vec3 inverse = ray.direction.cwiseInverse();
    double far = ray.far;
    const auto entry = [&](const Bounds& bounds) {
        double enter = ray.near, leave = far;
        for (int k = 0; k < 3; ++k) {
            const double low = (bounds.low[k] - above[k]) * inverse[k];
            const double high = (bounds.high[k] - below[k]) * inverse[k];
            enter = std::max(enter, std::min(low, high));
            leave = std::min(leave, std::max(low, high));
        }
        return enter <= leave ? enter : std::numeric_limits<double>::infinity();
    };

    struct Pending {
        std::uint32_t node;
        double entry;
    };
    std::array<Pending, largest_depth> pending;
    std::size_t waiting = 0;
    constexpr double missed = std::numeric_limits<double>::infinity();
    const Node* node = hierarchy.nodes.data();
    int tested = 1;
    if (entry(node->bounds) == missed) return tested;
    for (;;) {
        if (node->count > 0) {
            far = leaf(node->first, node->count, far);
        } else {
            const std::uint32_t left = node->first, right = left + 1;
            const double to_left = entry(hierarchy.nodes[left].bounds);
            const double to_right = entry(hierarchy.nodes[right].bounds);
            tested += 2;
            const bool left_first = to_left <= to_right;
            const double nearer = left_first ? to_left : to_right;
            const double farther = left_first ? to_right : to_left;
            if (farther != missed) pending[waiting++] = {left_first ? right : left, farther};
            if (nearer != missed) {
                node = &hierarchy.nodes[left_first ? left : right];
                continue;
            }
        }
        do {
            if (waiting == 0) return tested;
            --waiting;
        } while (pending[waiting].entry > far);
        node = &hierarchy.nodes[pending[waiting].node];
    }
}

}  // namespace glint
