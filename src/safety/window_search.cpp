// The window search: branch and bound over rectangular windows of a retinal image.
#include "window_sides.h"

#include <glint/safety/image_bound.h>
#include <glint/safety/window_search.h>

#include <algorithm>
#include <cmath>
#include <iterator>

namespace glint {
namespace {

// Candidate sides in a binary tree: first apart by length, then by place. A node knows what holds for all
// below it, and is divided when it is first asked for its children.
class SideTree {
public:
    struct Node {
        double low, high;  // around all sides below
        double shortest, longest;
        std::size_t first, count;  // sides below
        int left = -1;             // its children are left and left + 1; -1: not divided yet
    };

    explicit SideTree(std::vector<WindowSide> sides) : sides_(std::move(sides)) { add(0, sides_.size()); }

    [[nodiscard]] const Node& operator[](int node) const { return nodes_[node]; }

    // First of the two children; the node must hold more than one side.
    int children(int node) {
        if (nodes_[node].left < 0) {
            const Node parent = nodes_[node];
            const auto begin = sides_.begin() + static_cast<std::ptrdiff_t>(parent.first);
            const std::size_t half = parent.count / 2;
            const auto middle = begin + static_cast<std::ptrdiff_t>(half),
                       end = begin + static_cast<std::ptrdiff_t>(parent.count);
            if (parent.longest > 1.25 * parent.shortest)
                std::nth_element(begin, middle, end, [](const WindowSide& a, const WindowSide& b) {
                    return a.width() < b.width();
                });
            else
                std::nth_element(begin, middle, end,
                                 [](const WindowSide& a, const WindowSide& b) { return a.begin < b.begin; });
            nodes_[node].left = static_cast<int>(nodes_.size());
            add(parent.first, half);
            add(parent.first + half, parent.count - half);
        }
        return nodes_[node].left;
    }

private:
    void add(std::size_t first, std::size_t count) {
        Node node{1e9, -1e9, 1e9, 0, first, count};
        for (std::size_t i = first; i < first + count; ++i) {
            const WindowSide& side = sides_[i];
            node.low = std::min(node.low, side.begin), node.high = std::max(node.high, side.end);
            node.shortest = std::min(node.shortest, side.width()),
            node.longest = std::max(node.longest, side.width());
        }
        nodes_.push_back(node);
    }

    std::vector<WindowSide> sides_;
    std::vector<Node> nodes_;  // the root comes first
};

double clamped(double side) { return std::clamp(side, alpha_min, widest_side); }

// A rectangle of angles.
struct Window {
    double low_u, high_u, low_v, high_v;
};

// Share of [low, high] that a side within [from, to], at most `longest` long, can cover.
double overlap(double low, double high, double from, double to, double longest) {
    const double both = std::min(std::min(high, to) - std::max(low, from), longest);
    if (both <= 0) return 0;
    return both >= high - low ? 1 : both / (high - low);
}

// Bounds on the size of a family of windows.
PartSize size_of_family(double shortest_u, double longest_u, double shortest_v, double longest_v,
                        const Interval& whole) {
    return {.subtense = (clamped(shortest_u) + clamped(shortest_v)) / 2,
            .largest_subtense = (std::max(longest_u, alpha_min) + std::max(longest_v, alpha_min)) / 2,
            .side = std::max(shortest_u, shortest_v),
            .whole_subtense = whole};
}

// A family of windows: a node of each tree, and the boxes that its windows can touch.
struct Family {
    int side_u, side_v;
    std::vector<int> members;
    double excess;  // largest bound over what is known, by criterion
    Ratios bound;
};

struct LessPromising {
    bool operator()(const Family& a, const Family& b) const { return a.excess < b.excess; }
};

class Search {
public:
    Search(const TimePattern& pattern, const std::vector<SpotBox>& boxes, const Interval& whole,
           const Ratios& floor, double slack)
        : Search(pattern, boxes, candidate_sides(pattern, boxes), whole, floor, slack) {}

    WindowSearch run() {
        Family root{
            .side_u = 0, .side_v = 0, .members = std::vector<int>(boxes_.size()), .excess = 0, .bound = {}};
        for (std::size_t i = 0; i < boxes_.size(); ++i) root.members[i] = static_cast<int>(i);
        if (weigh(root)) open_.push_back(std::move(root));
        // Straight down to a good window of each criterion: with something known most families are dropped at
        // once.
        for (std::size_t c = 0; c < 4; ++c) dive(c);
        std::ranges::make_heap(open_, LessPromising{});
        while (!open_.empty()) {
            std::ranges::pop_heap(open_, LessPromising{});
            const Family family = std::move(open_.back());
            open_.pop_back();
            if (promise(family.bound) <= 1 + slack_) {
                drop(family.bound);
                continue;
            }
            for (Family& half : halves(family)) {
                open_.push_back(std::move(half));
                std::ranges::push_heap(open_, LessPromising{});
            }
        }
        return std::move(found_);
    }

private:
    Search(const TimePattern& pattern, const std::vector<SpotBox>& boxes, WindowSides sides,
           const Interval& whole, const Ratios& floor, double slack)
        : pattern_(pattern),
          boxes_(boxes),
          tree_u_(std::move(sides.u)),
          tree_v_(std::move(sides.v)),
          slack_(slack),
          whole_(whole),
          known_(floor) {}

    [[nodiscard]] double promise(const Ratios& bound) const {
        double most = 0;
        for (std::size_t c = 0; c < 4; ++c)
            if (bound[c] > 0) most = std::max(most, bound[c] / std::max(known_[c], 1e-300));
        return most;
    }

    void drop(const Ratios& bound) {
        for (std::size_t c = 0; c < 4; ++c) found_.bound[c] = std::max(found_.bound[c], bound[c]);
    }

    // Bounds a family; false when it need not be looked into any more, or is a single window, which is then
    // kept.
    bool weigh(Family& family) {
        const SideTree::Node u = tree_u_[family.side_u], v = tree_v_[family.side_v];
        ++found_.nodes;
        gather(family.members, u, v);
        if (energies_.empty()) return false;
        PartSize size = size_of_family(u.shortest, u.longest, v.shortest, v.longest, whole_);
        size.family = u.count > 1 || v.count > 1;
        const TimedRatios ratios = worst_over_time(pattern_, energies_, size, known_);
        if (u.count == 1 && v.count == 1) {
            keep({u.low, u.high, v.low, v.high}, ratios, size.subtense);
            return false;
        }
        for (std::size_t c = 0; c < 4; ++c) family.bound[c] = ratios[c].ratio;
        family.excess = promise(family.bound);
        if (family.excess > 1 + slack_) return true;
        drop(family.bound);
        return false;
    }

    void dive(std::size_t c) {
        if (open_.empty()) return;
        const auto best =
            std::ranges::max_element(open_, {}, [c](const Family& family) { return family.bound[c]; });
        Family family = std::move(*best);
        open_.erase(best);
        while (true) {
            std::vector<Family> pair = halves(family);
            if (pair.empty()) return;
            std::ranges::sort(pair, {}, [c](const Family& half) { return half.bound[c]; });
            family = std::move(pair.back());
            pair.pop_back();
            std::ranges::move(pair, std::back_inserter(open_));
        }
    }

    // Most energy by dwell, in time order, that a window of the family can hold, as if its limit were that of
    // the smallest. What a window takes of a spot grows no faster than its sides until they are those of the
    // spot, and so does its limit: over its limit it takes most at that size, or at the nearest to it that
    // the family has.
    void gather(std::span<const int> members, const SideTree::Node& u, const SideTree::Node& v) {
        energies_.clear();
        const double least = growth_of_limit((clamped(u.shortest) + clamped(v.shortest)) / 2);
        double spot_u = -1, spot_v = -1, factor = 1;
        for (const int i : members) {
            const SpotBox& box = boxes_[i];
            const double share_u = overlap(box.low_u, box.high_u, u.low, u.high, u.longest);
            if (share_u <= 0) continue;
            const double share = share_u * overlap(box.low_v, box.high_v, v.low, v.high, v.longest);
            if (share <= 0) continue;
            // Only the part of a spot that the family can reach counts.
            const double size_u = std::min(box.high_u, u.high) - std::max(box.low_u, u.low),
                         size_v = std::min(box.high_v, v.high) - std::max(box.low_v, v.low);
            if (size_u != spot_u || size_v != spot_v) {
                spot_u = size_u, spot_v = size_v;
                const double best_u = clamped(std::clamp(size_u, u.shortest, u.longest)),
                             best_v = clamped(std::clamp(size_v, v.shortest, v.longest));
                factor = std::min(1.0, least / growth_of_limit((best_u + best_v) / 2));
            }
            if (energies_.empty() || energies_.back().dwell != box.dwell) energies_.push_back({box.dwell, 0});
            energies_.back().energy += factor * share * box.energy;
        }
    }

    void keep(const Window& window, const TimedRatios& ratios, double subtense) {
        for (std::size_t c = 0; c < 4; ++c) {
            if (ratios[c].ratio <= known_[c]) continue;
            known_[c] = ratios[c].ratio;
            found_.bound[c] = std::max(found_.bound[c], ratios[c].ratio);
            found_.parts[c] = {.worst = ratios[c],
                               .low = {window.low_u, window.low_v},
                               .high = {window.high_u, window.high_v},
                               .subtense = subtense,
                               .zones = {}};
        }
    }

    // Divides the side whose family is wider than its windows by more; halves that need not be looked into
    // are left out.
    std::vector<Family> halves(const Family& family) {
        const SideTree::Node u = tree_u_[family.side_u], v = tree_v_[family.side_v];
        const double loose_u = u.count == 1 ? -1 : (u.high - u.low) / u.shortest,
                     loose_v = v.count == 1 ? -1 : (v.high - v.low) / v.shortest;
        const bool along_u = loose_u >= loose_v;
        const int left = along_u ? tree_u_.children(family.side_u) : tree_v_.children(family.side_v);
        std::vector<Family> pair;
        for (const int child : {left, left + 1}) {
            Family half{.side_u = along_u ? child : family.side_u,
                        .side_v = along_u ? family.side_v : child,
                        .members = {},
                        .excess = 0,
                        .bound = {}};
            const SideTree::Node &hu = tree_u_[half.side_u], &hv = tree_v_[half.side_v];
            for (const int i : family.members) {
                const SpotBox& box = boxes_[i];
                if (box.high_u > hu.low && box.low_u < hu.high && box.high_v > hv.low && box.low_v < hv.high)
                    half.members.push_back(i);
            }
            if (!half.members.empty() && weigh(half)) pair.push_back(std::move(half));
        }
        return pair;
    }

    const TimePattern& pattern_;
    const std::vector<SpotBox>& boxes_;
    SideTree tree_u_, tree_v_;
    double slack_;
    Interval whole_;
    Ratios known_;
    WindowSearch found_;
    std::vector<DwellEnergy> energies_;
    std::vector<Family> open_;  // a heap once the search has begun
};

// Whether all of an image, over the limit of the smallest part, exceeds what is known.
bool matters(const TimePattern& pattern, const std::vector<SpotBox>& boxes, const Interval& whole,
             const Ratios& floor, double slack) {
    double low_u = 1e9, high_u = -1e9, low_v = 1e9, high_v = -1e9;
    for (const SpotBox& box : boxes) {
        low_u = std::min(low_u, box.low_u), high_u = std::max(high_u, box.high_u);
        low_v = std::min(low_v, box.low_v), high_v = std::max(high_v, box.high_v);
    }
    const auto longest = [](double extent) { return std::clamp(extent, alpha_min, widest_side); };
    const double longest_u = longest(high_u - low_u), longest_v = longest(high_v - low_v);
    std::vector<DwellEnergy> energies;
    for (const SpotBox& box : boxes) {
        const double share = std::min(1.0, longest_u / (box.high_u - box.low_u)) *
                             std::min(1.0, longest_v / (box.high_v - box.low_v));
        const double best_u = std::clamp(box.high_u - box.low_u, alpha_min, longest_u),
                     best_v = std::clamp(box.high_v - box.low_v, alpha_min, longest_v);
        const double factor = growth_of_limit(alpha_min) / growth_of_limit((best_u + best_v) / 2);
        if (energies.empty() || energies.back().dwell != box.dwell) energies.push_back({box.dwell, 0});
        energies.back().energy += share * factor * box.energy;
    }
    const TimedRatios worst = worst_over_time(
        pattern, energies, size_of_family(alpha_min, longest_u, alpha_min, longest_v, whole), floor);
    for (std::size_t c = 0; c < 4; ++c)
        if (worst[c].ratio > floor[c] * (1 + slack)) return true;
    return false;
}

}  // namespace

WindowSearch search_windows(const TimePattern& pattern, std::span<const Spot> spots,
                            std::span<const int> dwell_of_zone, const Ratios& floor, double slack,
                            std::optional<Interval> whole) {
    if (spots.empty()) return {};
    if (!whole) {
        const double subtense = whole_subtense(spots);
        whole = Interval{subtense, subtense};
    }
    std::vector<SpotBox> boxes = boxes_of(spots, dwell_of_zone);
    if (!matters(pattern, boxes, *whole, floor, slack)) return {};
    snap_edges(boxes);
    WindowSearch found = Search(pattern, boxes, *whole, floor, slack).run();
    for (ImagePart& part : found.parts) {
        if (part.worst.ratio <= 0) continue;
        for (const Spot& spot : spots) {
            const bool inside = spot.middle.x() + spot.half.x() > part.low.x() &&
                                spot.middle.x() - spot.half.x() < part.high.x() &&
                                spot.middle.y() + spot.half.y() > part.low.y() &&
                                spot.middle.y() - spot.half.y() < part.high.y();
            if (inside) part.zones.push_back(spot.zone);
        }
        std::ranges::sort(part.zones);
        part.zones.erase(std::unique(part.zones.begin(), part.zones.end()), part.zones.end());
    }
    return found;
}

}  // namespace glint
