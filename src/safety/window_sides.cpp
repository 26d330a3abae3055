// The sides that the worst window of an image can have.
#include "window_sides.h"

#include <glint/safety/factors.h>

#include <algorithm>
#include <cmath>
#include <functional>

namespace glint {
namespace {

constexpr double short_side = 5e-3;  // alpha_max up to 625 us
constexpr double snapping = 1e-3;    // of the side of a spot: edges closer than this are one
constexpr std::size_t many_dwells = 64;
constexpr std::size_t few_dwells = 16;

// Of edges of spots that are `side` wide.
double tolerance(double side) { return std::max(1e-9, snapping * std::max(side, 0.2 * alpha_min)); }

// Sides of the narrowest spots.
Vec2 narrowest(std::span<const SpotBox> boxes) {
    Vec2 least = Vec2::Ones();
    for (const SpotBox& box : boxes)
        least = least.cwiseMin(Vec2(box.high_u - box.low_u, box.high_v - box.low_v));
    return least;
}

template <class Less>
void snap(std::vector<SpotBox>& boxes, double SpotBox::*edge, double tolerance, const Less& less) {
    std::vector<SpotBox*> order;
    for (SpotBox& box : boxes) order.push_back(&box);
    std::ranges::sort(order, [&](const SpotBox* a, const SpotBox* b) { return less(a->*edge, b->*edge); });
    double kept = order.front()->*edge;
    for (SpotBox* box : order) {
        if (std::abs(box->*edge - kept) > tolerance) kept = box->*edge;
        box->*edge = kept;
    }
}

std::vector<double> distinct(std::vector<double> values) {
    std::ranges::sort(values);
    values.erase(std::unique(values.begin(), values.end()), values.end());
    return values;
}

// alpha_max of every stretch of time that the dwells of an image can make, those within half a percent (with
// many dwells one percent) as the smallest.
std::vector<double> side_limits(const TimePattern& pattern, std::span<const SpotBox> boxes) {
    double apart = 1.005;
    std::vector<double> limits{alpha_max(pattern.plan.pulse_width), short_side, widest_side};
    std::vector<double> starts;
    for (const SpotBox& box : boxes) starts.push_back(pattern.plan.start[box.dwell]);
    starts = distinct(std::move(starts));
    const double period = pattern.plan.frame_period;
    if (starts.size() > few_dwells || period < 5e-3) {
        if (starts.size() > many_dwells) apart = 1.01;
        for (double limit = short_side; limit < widest_side; limit *= apart) limits.push_back(limit);
    } else {
        for (double frames = 0; frames * period < 0.25; ++frames)
            for (const double first : starts)
                for (const double last : starts) {
                    const double duration =
                        frames * period + last - first + (last < first ? period : 0) + pattern.dwell_length;
                    if (duration < 0.25) limits.push_back(alpha_max(duration));
                }
    }
    limits = distinct(std::move(limits));
    std::vector<double> kept{alpha_min};
    for (const double limit : limits)
        if (limit > apart * kept.back()) kept.push_back(limit);
    if (kept.back() < widest_side) kept.push_back(widest_side);
    return kept;
}

std::vector<WindowSide> sides_along(std::span<const SpotBox> boxes, double SpotBox::*low,
                                    double SpotBox::*high, std::span<const double> lengths, double hair) {
    std::vector<double> lows, highs;
    for (const SpotBox& box : boxes) lows.push_back(box.*low), highs.push_back(box.*high);
    const double first = *std::ranges::min_element(lows), last = *std::ranges::max_element(highs);
    if (hair > 0)
        for (const SpotBox& box : boxes) lows.push_back(box.*high - hair), highs.push_back(box.*low + hair);
    lows = distinct(std::move(lows)), highs = distinct(std::move(highs));
    std::vector<WindowSide> sides;
    for (const double begin : lows) {
        for (const double end : highs)
            if (end - begin > alpha_min && end - begin <= widest_side) sides.push_back({begin, end});
        for (const double length : lengths)
            if (begin + length < last || length == alpha_min) sides.push_back({begin, begin + length});
    }
    for (const double end : highs)
        for (const double length : lengths)
            if (end - length > first) sides.push_back({end - length, end});
    return sides;
}

}  // namespace

std::vector<SpotBox> boxes_of(std::span<const Spot> spots, std::span<const int> dwell_of_zone) {
    std::vector<SpotBox> boxes;
    boxes.reserve(spots.size());
    for (const Spot& spot : spots)
        boxes.push_back({spot.middle.x() - spot.half.x(), spot.middle.x() + spot.half.x(),
                         spot.middle.y() - spot.half.y(), spot.middle.y() + spot.half.y(), spot.energy,
                         dwell_of_zone[spot.zone]});
    std::ranges::stable_sort(boxes, {}, &SpotBox::dwell);
    return boxes;
}

void snap_edges(std::vector<SpotBox>& boxes) {
    const Vec2 side = narrowest(boxes);
    snap(boxes, &SpotBox::low_u, tolerance(side.x()), std::less{});
    snap(boxes, &SpotBox::high_u, tolerance(side.x()), std::greater{});
    snap(boxes, &SpotBox::low_v, tolerance(side.y()), std::less{});
    snap(boxes, &SpotBox::high_v, tolerance(side.y()), std::greater{});
}

WindowSides candidate_sides(const TimePattern& pattern, std::span<const SpotBox> boxes) {
    const std::vector<double> lengths = side_limits(pattern, boxes);
    const bool touching = counts_dwells(pattern) && boxes.front().dwell != boxes.back().dwell;
    const Vec2 side = narrowest(boxes);
    const Vec2 hair = touching ? Vec2(tolerance(side.x()), tolerance(side.y())) : Vec2(0, 0);
    return {sides_along(boxes, &SpotBox::low_u, &SpotBox::high_u, lengths, hair.x()),
            sides_along(boxes, &SpotBox::low_v, &SpotBox::high_v, lengths, hair.y())};
}

}  // namespace glint
