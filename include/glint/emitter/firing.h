// The firing plan: which zones fire when, over one frame.
#pragma once

#include <glint/design/design.h>
#include <glint/emitter/array.h>
#include <span>
#include <vector>

namespace glint {

/// One frame. Dwell d fires its zones together, `shots` times.
struct FiringPlan {
    std::vector<int> zones;     ///< zones in firing order, `zones_at_once` for each dwell (fewer in the last)
    std::vector<double> start;  ///< [dwells] time of the first shot of each dwell in the frame [s]
    int zones_at_once = 1;
    int shots = 1;            ///< in a dwell
    double shot_period = 0;   ///< from shot to shot [s]
    double pulse_width = 0;   ///< [s]
    double frame_period = 0;  ///< [s]

    [[nodiscard]] int dwells() const { return static_cast<int>(start.size()); }
    [[nodiscard]] std::span<const int> zones_of(int dwell) const;
    [[nodiscard]] double dwell_length() const {
        return shots * shot_period;
    }  ///< first shot to after the last [s]
};

/// Lays out one frame. Errors: more zones at once than there are, a set of zones that a row-by-column matrix
/// cannot fire alone, a frame period shorter than its dwells.
[[nodiscard]] FiringPlan plan_firing(const Design& design, const EmitterArray& array);

/// Average optical power of the chip over a frame [W], when every emitter sends `peak_power`.
[[nodiscard]] double average_power(const FiringPlan& plan, const EmitterArray& array, double peak_power);

}  // namespace glint
