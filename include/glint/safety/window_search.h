// The window search: the part of a retinal image with the largest ratio of emission to limit.
#pragma once

#include <glint/safety/apparent_source.h>
#include <glint/safety/time_pattern.h>

#include <array>
#include <optional>
#include <span>
#include <vector>

namespace glint {

/// A part of an image held against the limits.
struct ImagePart {
    TimedRatio worst;         ///< ratio 0: nothing above the floor
    Vec2 low = Vec2::Zero();  ///< corners of the window [rad]
    Vec2 high = Vec2::Zero();
    double subtense = 0;     ///< clamped mean of the sides [rad]
    std::vector<int> zones;  ///< that contribute
};

/// Worst part for each criterion, indexed by PulseCriterion.
using WorstImageParts = std::array<ImagePart, 4>;

struct WindowSearch {
    WorstImageParts parts;
    Ratios bound{};         ///< no window of the image exceeds it, where it is above the floor
    std::size_t nodes = 0;  ///< families of windows tried
};

/// Maximises AE/AEL over every rectangular window of an image, for each criterion, as far as it exceeds
/// `floor`. Sides count as at least 1.5 mrad and must not exceed alpha_max of the duration; the subtense is
/// their mean (IEC 60825-1:2014, 4.3, from memory). The sides of the best window run from the low edge of a
/// spot to the high edge of one, or have one end there and are 1.5 mrad, 5 mrad or 100 mrad long, or, over
/// spots larger than 5 mrad, one of a series 1 % apart. Families of such windows are halved; a family is
/// dropped when the energy around all its windows over the limit of its smallest exceeds what was found by no
/// more than `slack`, a share. Where N depends on it, sides that just touch one more spot are tried as well.
/// `dwell_of_zone` [zones]; `whole` [rad]: subtense of the whole image, for C5, where the spots are not all
/// of one image.
[[nodiscard]] WindowSearch search_windows(const TimePattern& pattern, std::span<const Spot> spots,
                                          std::span<const int> dwell_of_zone, const Ratios& floor,
                                          double slack, std::optional<Interval> whole = {});

}  // namespace glint
