// Building the bounding hierarchy by binned surface-area cost.
#include <glint/core/error.h>
#include <glint/scene/hierarchy.h>

#include <algorithm>
#include <array>
#include <limits>
#include <string>

namespace glint {
namespace {

constexpr int most_bins = 16;
constexpr int halving_depth = 60;  // below this depth nodes are halved: 60 + log2(2^31) stays under the limit

struct Item {
    Bounds bounds;
    std::uint32_t number = 0;
    [[nodiscard]] Vec3 centre() const { return bounds.centre(); }
};

struct Split {
    double cost = std::numeric_limits<double>::infinity();  // sum of half area * items of both sides
    int axis = 0;
    int bin = 0;  // first bin of the right side
};

// Maps centres along one axis to bins.
struct Binning {
    double low = 0, scale = 0;
    int bins = 1;
    [[nodiscard]] int bin_of(double centre) const {
        return std::min(static_cast<int>((centre - low) * scale), bins - 1);
    }
};

Binning binning_of(const Bounds& centres, int axis, std::size_t count) {
    const int bins = static_cast<int>(std::min<std::size_t>(most_bins, count));
    const double width = centres.high[axis] - centres.low[axis];
    return {.low = centres.low[axis], .scale = width > 0 ? bins / width : 0, .bins = bins};
}

Split best_split(std::span<const Item> items, const Bounds& centres) {
    struct Bin {
        Bounds bounds;
        std::uint32_t count = 0;
    };
    Split best;
    for (int axis = 0; axis < 3; ++axis) {
        const Binning binning = binning_of(centres, axis, items.size());
        if (!(binning.scale > 0) || !(binning.scale < std::numeric_limits<double>::infinity())) continue;
        std::array<Bin, most_bins> bins;
        for (const Item& item : items) {
            Bin& bin = bins[binning.bin_of(item.centre()[axis])];
            bin.bounds.add(item.bounds);
            ++bin.count;
        }
        std::array<double, most_bins> right_cost = {};  // of the bins from k on
        Bin right;
        for (int k = binning.bins - 1; k > 0; --k) {
            right.bounds.add(bins[k].bounds);
            right.count += bins[k].count;
            right_cost[k] = half_area(right.bounds) * right.count;
        }
        Bin left;
        for (int k = 1; k < binning.bins; ++k) {
            left.bounds.add(bins[k - 1].bounds);
            left.count += bins[k - 1].count;
            if (left.count == 0 || left.count == items.size()) continue;
            const double cost = half_area(left.bounds) * left.count + right_cost[k];
            if (cost < best.cost) best = {.cost = cost, .axis = axis, .bin = k};
        }
    }
    return best;
}

// Both halves get items even when all centres are equal, as the number breaks the tie.
std::size_t halve(std::span<Item> items, const Bounds& centres) {
    int axis = 0;
    (centres.high - centres.low).maxCoeff(&axis);
    const auto middle = items.begin() + static_cast<std::ptrdiff_t>(items.size() / 2);
    std::nth_element(items.begin(), middle, items.end(), [axis](const Item& a, const Item& b) {
        const double left = a.centre()[axis], right = b.centre()[axis];
        return left < right || (left == right && a.number < b.number);
    });
    return items.size() / 2;
}

struct Builder {
    std::vector<Item> items;
    std::vector<Node> nodes;
    HierarchyOptions options;

    void fill(std::uint32_t index, std::uint32_t first, std::uint32_t count, int depth) {
        const std::span<Item> mine = std::span(items).subspan(first, count);
        Bounds bounds, centres;
        for (const Item& item : mine) {
            bounds.add(item.bounds);
            centres.add(item.centre());
        }
        nodes[index] = {.bounds = bounds, .first = first, .count = count};
        if (count == 1) return;

        const Split split = depth < halving_depth ? best_split(mine, centres) : Split{};
        const double area = half_area(bounds);
        const bool worth_it = split.cost + area * options.step_cost < area * count;
        if (!worth_it && count <= options.largest_leaf) return;
        std::size_t left = 0;
        if (split.cost < std::numeric_limits<double>::infinity() && split.cost > 0) {
            const Binning binning = binning_of(centres, split.axis, count);
            const auto middle = std::partition(mine.begin(), mine.end(), [&](const Item& item) {
                return binning.bin_of(item.centre()[split.axis]) < split.bin;
            });
            left = static_cast<std::size_t>(middle - mine.begin());
        } else {
            left = halve(mine, centres);  // no axis to split on, or costs of 0 that compare nothing
        }
        const auto child = static_cast<std::uint32_t>(nodes.size());
        nodes.resize(nodes.size() + 2);
        nodes[index].first = child;
        nodes[index].count = 0;
        const auto left_count = static_cast<std::uint32_t>(left);
        fill(child, first, left_count, depth + 1);
        fill(child + 1, first + left_count, count - left_count, depth + 1);
    }
};

}  // namespace

Hierarchy build_hierarchy(std::span<const Bounds> bounds, const HierarchyOptions& options) {
    if (bounds.empty()) return {};
    if (bounds.size() > std::size_t{1} << 31)
        throw Error({.what = std::to_string(bounds.size()) + " shapes and triangles are too many",
                     .accepted = "at most 2^31 of them"});
    Builder builder{.items = {}, .nodes = {}, .options = options};
    builder.items.reserve(bounds.size());
    for (const Bounds& item : bounds)
        builder.items.push_back({item, static_cast<std::uint32_t>(builder.items.size())});
    builder.nodes.reserve(bounds.size());
    builder.nodes.resize(1);
    builder.fill(0, 0, static_cast<std::uint32_t>(bounds.size()), 1);

    Hierarchy result;
    result.nodes = std::move(builder.nodes);
    result.order.reserve(bounds.size());
    for (const Item& item : builder.items) result.order.push_back(item.number);
    const Bounds& root = result.nodes.front().bounds;
    result.extent = std::max(root.low.cwiseAbs().maxCoeff(), root.high.cwiseAbs().maxCoeff());
    return result;
}

HierarchyStatistics statistics(const Hierarchy& hierarchy, const HierarchyOptions& options) {
    HierarchyStatistics result;
    result.nodes = hierarchy.nodes.size();
    if (hierarchy.nodes.empty()) return result;
    std::vector<int> depth(hierarchy.nodes.size(), 1);  // children come after their parent
    for (std::size_t i = 0; i < hierarchy.nodes.size(); ++i) {
        const Node& node = hierarchy.nodes[i];
        const double area = half_area(node.bounds);
        result.depth = std::max(result.depth, depth[i]);
        if (node.count == 0) {
            depth[node.first] = depth[node.first + 1] = depth[i] + 1;
            result.cost += area * options.step_cost;
        } else {
            ++result.leaves;
            result.items += node.count;
            result.largest_leaf = std::max(result.largest_leaf, node.count);
            result.cost += area * node.count;
        }
    }
    const double root = half_area(hierarchy.nodes.front().bounds);
    result.cost = root > 0 ? result.cost / root : static_cast<double>(result.items);
    return result;
}

}  // namespace glint
