// The sides that the worst window of an image can have, for search_windows().
#pragma once

#include <glint/safety/apparent_source.h>
#include <glint/safety/time_pattern.h>

#include <span>
#include <vector>

namespace glint {

inline constexpr double widest_side = 100e-3;  // rad, alpha_max from 0.25 s on

/// A spot as edges [rad], with the energy that it has in its dwell [J].
struct SpotBox {
    double low_u, high_u, low_v, high_v;
    double energy;
    int dwell;
};

/// Sorted by dwell, so that energies of a dwell are summed in one run.
[[nodiscard]] std::vector<SpotBox> boxes_of(std::span<const Spot> spots, std::span<const int> dwell_of_zone);

/// Edges that all but coincide become one: arithmetic on one row of emitters differs by less, and so do beams
/// of one kind that a lens treats a little differently. Low edges go down and high edges up.
void snap_edges(std::vector<SpotBox>& boxes);

/// One side of a window [rad].
struct WindowSide {
    double begin, end;
    [[nodiscard]] double width() const { return end - begin; }
};

/// Sides of windows, across and up.
struct WindowSides {
    std::vector<WindowSide> u, v;
};

/// From the low edge of a spot to the high edge of one, or with one end on such an edge and as long as
/// alpha_max of a stretch of time that the dwells of the image can make (those within half a percent, with
/// many dwells one percent, as the smallest). Where counts_dwells(): or from just below the high edge of a
/// spot, or to just above the low edge of one, so that the window has the pulses of one more dwell.
[[nodiscard]] WindowSides candidate_sides(const TimePattern& pattern, std::span<const SpotBox> boxes);

}  // namespace glint
