// Bounding hierarchy over finite items: a flat array of nodes, built by binned surface-area cost.
#pragma once

#include <glint/scene/bounds.h>

#include <cstdint>
#include <span>
#include <vector>

namespace glint {

/// One node. A leaf (count > 0) holds items first .. first + count - 1; an inner node (count 0) has the
/// children nodes[first] and nodes[first + 1].
struct Node {
    Bounds bounds;
    std::uint32_t first = 0;
    std::uint32_t count = 0;
};

/// The tree. Node 0 is the root; no nodes at all when there are no items.
struct Hierarchy {
    std::vector<Node> nodes;
    std::vector<std::uint32_t> order;  ///< item number at each leaf position, a permutation of 0 .. n - 1
    double extent = 0;                 ///< largest |coordinate| of the root's bounds, m
};

/// No path from the root is longer; so a traversal needs no more than this many pending nodes.
inline constexpr int largest_depth = 96;

struct HierarchyOptions {
    double step_cost = 1;            ///< cost of an inner node in units of one item test
    std::uint32_t largest_leaf = 8;  ///< items; more are split even when the cost says otherwise
};

/// Builds the tree for items given by their bounds, which must be finite and not empty, at most 2^31 of them.
/// Splits minimize the surface-area cost (Goldsmith & Salmon 1987; MacDonald & Booth 1990) over 16 bins of
/// centres on each axis (Wald 2007). Items with equal centres are halved by number. The result depends on
/// the items only.
[[nodiscard]] Hierarchy build_hierarchy(std::span<const Bounds> items, const HierarchyOptions& options = {});

/// Figures that tell a good tree from a bad one.
struct HierarchyStatistics {
    std::size_t nodes = 0;
    std::size_t leaves = 0;
    std::size_t items = 0;
    int depth = 0;                   ///< nodes on the longest path; 0 for no tree
    std::uint32_t largest_leaf = 0;  ///< items
    /// Expected work of a random line that meets the root, in item tests, by the ratio of surfaces:
    /// (sum over inner nodes of area * step_cost + sum over leaves of area * count) / area of the root.
    double cost = 0;
};

[[nodiscard]] HierarchyStatistics statistics(const Hierarchy& hierarchy,
                                             const HierarchyOptions& options = {});

}  // namespace glint
