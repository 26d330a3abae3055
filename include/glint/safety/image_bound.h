// A quick bound on what any part of a retinal image can give, to leave most images unsearched.
#pragma once

#include <glint/safety/apparent_source.h>
#include <glint/safety/time_pattern.h>

#include <span>

namespace glint {

/// What is known of the light of an image before its spots are looked at.
struct LightRatios {
    Ratios as_point{};    ///< AE/AEL of all of it as a point source
    Ratios per_energy{};  ///< AE/AEL of one beam as a point source, over its energy per shot [1/J]; not for
                          ///< trains
};

/// For each criterion at least the largest AE/AEL of any window of the image. A window whose longest side is
/// m holds no more than all that lies within m beside some spot; that many beams give together at most the
/// sum of what each gives, or the most that one dwell gives where pulses and groups are of one dwell. Looks
/// no closer once no bound exceeds `known`; images of more than 400 spots are bounded by the size of their
/// spots only. `dwell_of_zone` [zones].
[[nodiscard]] Ratios image_bound(const TimePattern& pattern, std::span<const Spot> spots,
                                 std::span<const int> dwell_of_zone, const LightRatios& light,
                                 const Ratios& known);

/// The limit of a part grows with its subtense [rad] at least in proportion to this, for every duration:
/// alpha while T2 plays no part, alpha T2^-0.25 beyond.
[[nodiscard]] double growth_of_limit(double subtense);

}  // namespace glint
