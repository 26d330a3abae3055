// What a stretch of time holds, and its limit.
#include "stretch.h"

#include <algorithm>
#include <cmath>

namespace glint {
namespace {

// Limits without C6 have one row that asks for an extended source; it only lowers the limit, so it always
// counts.
constexpr double without_c6 = 2 * alpha_min;

double in_tables(double duration) { return std::clamp(duration, limit_durations.from, limit_durations.to); }

// Shots of a dwell that start within a stretch that opens with its first shot.
double shots_within(const TimePattern& pattern, double stretch) {
    if (stretch < 0) return 0;
    return std::min<double>(pattern.plan.shots,
                            std::floor(stretch / pattern.plan.shot_period * (1 + 1e-12)) + 1);
}

}  // namespace

double part_limit(const TimePattern& pattern, double duration, double point_limit, double subtense,
                  double T2) {
    if (pattern.curve.mechanism != Mechanism::retinal_thermal) return point_limit;
    if (duration <= short_of_t2) return point_limit * std::max(1.0, subtense / alpha_min);
    return pattern.curve.energy(in_tables(duration), subtense, T2);
}

double point_limit(const TimePattern& pattern, double duration) {
    const bool retinal = pattern.curve.mechanism == Mechanism::retinal_thermal;
    return pattern.curve.energy(in_tables(duration), retinal ? alpha_min : without_c6, small_t2);
}

bool counts(const TimePattern& pattern, double duration) {
    return duration <= pattern.rules.time_base && duration >= pattern.rules.durations.from &&
           duration <= pattern.rules.durations.to;
}

TimedRatio emission(double duration, double pulses, double ae, double ael) {
    return {.ratio = ae / ael, .duration = duration, .pulses = pulses, .ae = ae, .ael = ael};
}

double start_of(const TimePattern& pattern, const DwellEnergy& dwell) {
    return pattern.plan.start[dwell.dwell];
}

// The most that starts within a stretch shorter than a frame: the stretch opens with the first shot of a
// dwell or closes with the last shot of one, because between such moments the energy changes at a constant
// rate. Dwells do not overlap, so all but one of those that it reaches are whole.
Within most_within(const TimePattern& pattern, std::span<const DwellEnergy> dwells, double stretch) {
    const FiringPlan& plan = pattern.plan;
    const double last_shot = (plan.shots - 1) * plan.shot_period, slack = 1e-12 * plan.frame_period;
    const std::size_t count = dwells.size();
    const auto time = [&](std::size_t i) {
        return start_of(pattern, dwells[i % count]) + (i >= count ? plan.frame_period : 0);
    };
    Within most;
    const auto consider = [&](double whole, std::size_t number, double part, double energy) {
        const Within found{whole * plan.shots + part * energy,
                           static_cast<double>(number) * plan.shots + part};
        if (found.energy > most.energy) most = found;
    };
    // Opened by dwell `first`: those up to `next` are whole.
    double sum = 0;
    std::size_t next = 0;
    for (std::size_t first = 0; first < count; ++first) {
        if (next < first) next = first, sum = 0;
        while (next < first + count && time(next) + last_shot - time(first) <= stretch + slack)
            sum += dwells[next++ % count].energy;
        const double part =
            next < first + count ? shots_within(pattern, stretch - (time(next) - time(first))) : 0;
        consider(sum, next - first, part, dwells[next % count].energy);
        if (next > first) sum -= dwells[first].energy;
    }
    // Closed by dwell `last`, counted in the second of two frames: those from `first` on are whole.
    sum = 0;
    std::size_t first = 1;
    for (std::size_t i = 1; i < count; ++i) sum += dwells[i].energy;
    for (std::size_t last = count; last < 2 * count; ++last) {
        sum += dwells[last - count].energy;
        while (first <= last && time(last) + last_shot - time(first) > stretch + slack)
            sum -= dwells[first++ % count].energy;
        const std::size_t before = first - 1;  // reached in part, unless it is `last` of the frame before
        const double part =
            before + count > last ? shots_within(pattern, stretch - (time(last) - time(before))) : 0;
        consider(sum, last + 1 - first, std::min<double>(part, plan.shots), dwells[before % count].energy);
        if (first + count == last + 1) sum -= dwells[first++ % count].energy;
    }
    return most;
}

}  // namespace glint
