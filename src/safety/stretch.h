// What a stretch of time holds, and its limit: shared by the criteria of worst_over_time().
#pragma once

#include <glint/safety/time_pattern.h>

namespace glint {

inline constexpr double small_t2 = 10;  // s, T2 of a small source
// Up to here a retinal limit is C6 times that of a point.
inline constexpr double short_of_t2 = small_t2 * (1 - 1e-6);

/// Limit of a part for a duration [J], given that of a point for durations where that is enough.
[[nodiscard]] double part_limit(const TimePattern& pattern, double duration, double point_limit,
                                double subtense, double T2);

/// Limit of a point source [J].
[[nodiscard]] double point_limit(const TimePattern& pattern, double duration);

/// Whether a duration is within the time base and belongs to the aperture under test.
[[nodiscard]] bool counts(const TimePattern& pattern, double duration);

[[nodiscard]] TimedRatio emission(double duration, double pulses, double ae, double ael);

/// Start of the first pulse of a dwell [s].
[[nodiscard]] double start_of(const TimePattern& pattern, const DwellEnergy& dwell);

/// What starts within a stretch.
struct Within {
    double energy = 0;  ///< [J]
    double pulses = 0;
};

/// The most that starts within a stretch shorter than a frame.
[[nodiscard]] Within most_within(const TimePattern& pattern, std::span<const DwellEnergy> dwells,
                                 double stretch);

/// The average criterion of worst_over_time(): the worst stretch over all durations.
[[nodiscard]] TimedRatio worst_average(const TimePattern& pattern, std::span<const DwellEnergy> dwells,
                                       const PartSize& size, double known);

}  // namespace glint
