// The time pattern: what a part of the image emits over the firing plan, held against the limits.
#pragma once

#include <glint/emitter/firing.h>
#include <glint/safety/class.h>
#include <glint/safety/limit_curve.h>
#include <glint/safety/pulses.h>

#include <array>
#include <span>
#include <vector>

namespace glint {

/// A dwell that sends something into the part under test.
struct DwellEnergy {
    int dwell = 0;
    double energy = 0;  ///< per shot [J], above 0
};

/// Which limits hold.
struct ExposureRules {
    LaserClass laser_class = LaserClass::class_1;  ///< a class with limits of the mechanism
    double wavelength = 0;                         ///< [m], 400 nm to 1800 nm
    double time_base = 100;                        ///< [s]
    Mechanism mechanism = Mechanism::retinal_thermal;
    Interval durations{0, 3e4};  ///< [s] of the emissions under test, for apertures that depend on it
};

/// The firing plan with the limits that belong to its durations, worked out once for many parts.
struct TimePattern {
    FiringPlan plan;
    ExposureRules rules;
    LimitCurve curve;
    double dwell_length = 0;   ///< first pulse's start to last pulse's end [s]
    double group_time = 0;     ///< Ti [s]
    double single_limit = 0;   ///< AEL(tp) of a point [J]
    double group_limit = 0;    ///< AEL(Ti) of a point [J]
    bool dwells_apart = true;  ///< no stretch of Ti reaches pulses of two dwells
};

/// Errors: a class without limits, wavelength or time base out of range.
[[nodiscard]] TimePattern time_pattern(const FiringPlan& plan, const ExposureRules& rules);

/// The part under test, or bounds on a family of parts.
struct PartSize {
    double subtense = 0;            ///< smallest clamped mean of the sides [rad]: sets C6 and T2 of the limit
    double largest_subtense = 0;    ///< largest of the family: sets N, and C5 where that depends on it
    double side = 0;                ///< longest side [rad]: must not exceed alpha_max(T)
    Interval whole_subtense{0, 0};  ///< of the whole image, for C5; least and largest of several images
    bool family =
        false;  ///< a bound is enough: averages may come out up to 2 % high, with more than 64 dwells 5 %
};

/// Nothing of an image gives more than all of it as a part of this size: the smallest subtense for the limit,
/// any for C5.
inline constexpr PartSize all_as_point{
    .subtense = alpha_min, .largest_subtense = 0.2, .side = 0, .whole_subtense = {alpha_min, 0.2}};

/// One emission held against its limit.
struct TimedRatio {
    double ratio = 0;     ///< AE/AEL; 0 when the criterion does not apply
    double duration = 0;  ///< [s]
    double pulses = 1;    ///< in it; for the train N
    double C5 = 1;
    double ae = 0;   ///< [J]
    double ael = 0;  ///< C5 included [J]
};

/// Worst of each criterion, indexed by PulseCriterion.
using TimedRatios = std::array<TimedRatio, 4>;

/// One ratio a criterion, indexed by PulseCriterion.
using Ratios = std::array<double, 4>;

/// Largest AE/AEL over every emission duration and start, for each criterion of IEC 60825-1:2014, 4.3 f).
/// single: the strongest pulse. group: the most that starts within Ti. train: the stricter of both over C5,
/// with N every group in min(T2, time base), frames counted upward. average: two shots of a dwell; every
/// stretch from the first pulse of one dwell to the last of another, with or without whole frames before it;
/// the shortest duration that the side of the part allows; 10 s, T2 and the time base. What starts and ends
/// within dwells is never worse than one of these (the ratio is quasi-convex in how much of a dwell is cut
/// off). The train is for retinal limits only. An average not above `known` may come back as 0. `dwells` in
/// time order. Monotone: more energy, a smaller subtense or side, a larger largest_subtense never lower it.
[[nodiscard]] TimedRatios worst_over_time(const TimePattern& pattern, std::span<const DwellEnergy> dwells,
                                          const PartSize& size, const Ratios& known = {});

/// No C5 of a part that touches so many dwells, at most `largest_subtense` large [rad], is below this.
[[nodiscard]] double least_c5(const TimePattern& pattern, double dwells, double largest_subtense);

/// Whether it matters for C5 how many dwells a part touches.
[[nodiscard]] bool counts_dwells(const TimePattern& pattern);

/// Largest energy whose pulses start within a stretch of time, over all starts [J]. `stretch` below the frame
/// period.
[[nodiscard]] double energy_within(const TimePattern& pattern, std::span<const DwellEnergy> dwells,
                                   double stretch);

/// Shortest duration whose alpha_max is at least `side` [rad]: 0 s up to 5 mrad, infinite beyond 100 mrad.
[[nodiscard]] double shortest_duration(double side);

}  // namespace glint
