// The time pattern: what a part of the image emits over the firing plan, held against the limits.
#include "stretch.h"

#include <algorithm>
#include <cmath>
#include <limits>

namespace glint {
namespace {

TimedRatio worst_single(const TimePattern& pattern, std::span<const DwellEnergy> dwells,
                        const PartSize& size) {
    double strongest = 0;
    for (const DwellEnergy& dwell : dwells) strongest = std::max(strongest, dwell.energy);
    const double duration = pattern.plan.pulse_width;
    if (shortest_duration(size.side) > duration || !counts(pattern, duration)) return {};
    return emission(duration, 1, strongest,
                    part_limit(pattern, duration, pattern.single_limit, size.subtense, small_t2));
}

TimedRatio worst_group(const TimePattern& pattern, std::span<const DwellEnergy> dwells,
                       const PartSize& size) {
    if (shortest_duration(size.side) > pattern.group_time || pattern.plan.pulse_width > pattern.group_time ||
        !counts(pattern, pattern.group_time))
        return {};
    const double frames = std::floor(pattern.group_time / pattern.plan.frame_period * (1 + 1e-12));
    Within most =
        most_within(pattern, dwells, std::max(0.0, pattern.group_time - frames * pattern.plan.frame_period));
    for (const DwellEnergy& dwell : dwells)
        most.energy += frames * pattern.plan.shots * dwell.energy, most.pulses += frames * pattern.plan.shots;
    if (most.pulses <= 1) return {};
    return emission(pattern.group_time, most.pulses, most.energy,
                    part_limit(pattern, pattern.group_time, pattern.group_limit, size.subtense, small_t2));
}

// Least C5 over a family of subtenses: at its ends and just beyond each bound between cells that lies inside.
double least_c5(const TimePattern& pattern, const PartSize& size, double count) {
    TrainPulse pulse{.wavelength = pattern.rules.wavelength,
                     .duration = pattern.plan.pulse_width,
                     .count = count,
                     .time_base = pattern.rules.time_base};
    double least = 1;
    const auto consider = [&](double subtense) {
        pulse.subtense = subtense;
        least = std::min(least, c5(pulse));
    };
    consider(size.subtense);
    if (pulse.duration <= pattern.group_time) return least;  // there C5 does not depend on the subtense
    for (const Interval& range : {Interval{size.subtense, size.largest_subtense}, size.whole_subtense}) {
        consider(range.from), consider(range.to);
        for (const double bound : {5e-3, alpha_max(pulse.duration), 100e-3})
            for (const double beside : {bound * (1 - 1e-9), bound * (1 + 1e-9)})
                if (beside > range.from && beside < range.to) consider(beside);
    }
    return least;
}

// Most dwells that start within a stretch no longer than a frame.
double dwells_within(const TimePattern& pattern, std::span<const DwellEnergy> dwells, double stretch) {
    std::size_t most = 1, next = 0;
    for (std::size_t first = 0; first < dwells.size(); ++first) {
        const auto later = [&](std::size_t i) {
            const double wrap = i < dwells.size() ? 0 : pattern.plan.frame_period;
            return wrap + start_of(pattern, dwells[i % dwells.size()]) - start_of(pattern, dwells[first]);
        };
        next = std::max(next, first);
        while (next < first + dwells.size() && later(next) <= stretch * (1 + 1e-12)) ++next;
        most = std::max(most, next - first);
    }
    return static_cast<double>(most);
}

// Groups within Ti, or pulses where these hold only one.
double groups_in_dwell(const TimePattern& pattern, bool grouped) {
    const FiringPlan& plan = pattern.plan;
    const double span = (plan.shots - 1) * plan.shot_period;
    return grouped ? std::min<double>(plan.shots, std::floor(span / pattern.group_time) + 1) : plan.shots;
}

TimedRatio worst_train(const TimePattern& pattern, std::span<const DwellEnergy> dwells, const PartSize& size,
                       const TimedRatio& single, const TimedRatio& group, double known) {
    const FiringPlan& plan = pattern.plan;
    if (pattern.curve.mechanism != Mechanism::retinal_thermal || plan.pulse_width > aversion_time_base ||
        single.ratio <= 0)
        return {};
    if (std::max(single.ratio, group.ratio) <= smallest_c5 * known) return {};
    const bool grouped = group.pulses > 1;
    const double window = std::min(t2(size.largest_subtense), pattern.rules.time_base);
    const double frames = std::ceil(window / plan.frame_period * (1 - 1e-12));
    const double dwells_counted =
        frames > 1 ? frames * static_cast<double>(dwells.size()) : dwells_within(pattern, dwells, window);
    const double count = groups_in_dwell(pattern, grouped) * dwells_counted;
    TimedRatio worst = grouped && group.ratio > single.ratio ? group : single;
    worst.C5 = least_c5(pattern, size, std::max(1.0, count));
    worst.pulses = std::max(1.0, count);
    worst.ael *= worst.C5;
    worst.ratio = worst.ae / worst.ael;
    return worst;
}

// Whether no stretch of a time reaches pulses of two dwells.
bool dwells_apart(const FiringPlan& plan, double time) {
    const double last_shot = (plan.shots - 1) * plan.shot_period;
    for (int dwell = 0; dwell < plan.dwells(); ++dwell) {
        const double next =
            dwell + 1 < plan.dwells() ? plan.start[dwell + 1] : plan.start.front() + plan.frame_period;
        if (next - plan.start[dwell] - last_shot <= time * (1 + 1e-9)) return false;
    }
    return true;
}

}  // namespace

double shortest_duration(double side) {
    if (side <= 5e-3 * (1 + 1e-9)) return 0;
    if (side > 100e-3 * (1 + 1e-9)) return std::numeric_limits<double>::infinity();
    return (side / 0.2) * (side / 0.2) * (1 - 1e-9);  // alpha_max = 200 mrad sqrt(t)
}

TimePattern time_pattern(const FiringPlan& plan, const ExposureRules& rules) {
    TimePattern pattern{.plan = plan, .rules = rules};
    pattern.curve = limit_curve(rules.laser_class, rules.wavelength, rules.mechanism);
    const auto point = [&](double duration) { return point_limit(pattern, duration); };
    pattern.dwell_length = (plan.shots - 1) * plan.shot_period + plan.pulse_width;
    pattern.group_time = grouping_time(rules.wavelength);
    pattern.dwells_apart = dwells_apart(plan, pattern.group_time);
    pattern.single_limit = point(plan.pulse_width);
    pattern.group_limit = point(pattern.group_time);
    return pattern;
}

double least_c5(const TimePattern& pattern, double dwells, double largest_subtense) {
    const FiringPlan& plan = pattern.plan;
    const bool grouped = plan.shots > 1 && plan.shot_period <= pattern.group_time;  // in every part
    const double frames =
        std::ceil(std::min(t2(largest_subtense), pattern.rules.time_base) / plan.frame_period);
    PartSize size = all_as_point;
    size.largest_subtense = largest_subtense;
    return least_c5(pattern, size, groups_in_dwell(pattern, grouped) * frames * dwells);
}

bool counts_dwells(const TimePattern& pattern) {
    if (pattern.curve.mechanism != Mechanism::retinal_thermal ||
        pattern.plan.pulse_width > aversion_time_base)
        return false;
    return least_c5(pattern, pattern.plan.dwells(), all_as_point.largest_subtense) <
           least_c5(pattern, 1, alpha_min);
}

double energy_within(const TimePattern& pattern, std::span<const DwellEnergy> dwells, double stretch) {
    return most_within(pattern, dwells, stretch).energy;
}

TimedRatios worst_over_time(const TimePattern& pattern, std::span<const DwellEnergy> dwells,
                            const PartSize& size, const Ratios& known) {
    TimedRatios worst;
    if (dwells.empty()) return worst;
    TimedRatio& single = worst[static_cast<int>(PulseCriterion::single)];
    TimedRatio& group = worst[static_cast<int>(PulseCriterion::group)];
    single = worst_single(pattern, dwells, size);
    group = worst_group(pattern, dwells, size);
    worst[static_cast<int>(PulseCriterion::train)] =
        worst_train(pattern, dwells, size, single, group, known[static_cast<int>(PulseCriterion::train)]);
    worst[static_cast<int>(PulseCriterion::average)] =
        worst_average(pattern, dwells, size, known[static_cast<int>(PulseCriterion::average)]);
    return worst;
}

}  // namespace glint
