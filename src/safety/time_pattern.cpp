// The time pattern: what a part of the image emits over the firing plan, held against the limits.
#include <glint/safety/time_pattern.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace glint {
namespace {

constexpr double small_t2 = 10;  // s, T2 of a small source
// Up to here a retinal limit is C6 times that of a point.
constexpr double short_of_t2 = small_t2 * (1 - 1e-6);
constexpr double least_of_c5 = 0.2;
// Limits without C6 have one row that asks for an extended source; it only lowers the limit, so it always
// counts.
constexpr double without_c6 = 2 * alpha_min;

double in_tables(double duration) { return std::clamp(duration, limit_durations.from, limit_durations.to); }

// Limit of a part for a duration, given that of a point for durations where that is enough.
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

// Whether a duration is within the time base and belongs to the aperture under test.
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

// Shots of a dwell that start within a stretch that opens with its first shot.
double shots_within(const TimePattern& pattern, double stretch) {
    if (stretch < 0) return 0;
    return std::min<double>(pattern.plan.shots,
                            std::floor(stretch / pattern.plan.shot_period * (1 + 1e-12)) + 1);
}

struct Within {
    double energy = 0, pulses = 0;
};

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
    consider(size.largest_subtense);
    consider(size.whole_subtense);
    for (const double bound : {5e-3, alpha_max(pulse.duration), 100e-3})
        for (const double beside : {bound * (1 - 1e-9), bound * (1 + 1e-9)})
            if (beside > size.subtense && beside < size.largest_subtense) consider(beside);
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

TimedRatio worst_train(const TimePattern& pattern, std::span<const DwellEnergy> dwells, const PartSize& size,
                       const TimedRatio& single, const TimedRatio& group, double known) {
    const FiringPlan& plan = pattern.plan;
    if (pattern.curve.mechanism != Mechanism::retinal_thermal || plan.pulse_width > aversion_time_base ||
        single.ratio <= 0)
        return {};
    if (std::max(single.ratio, group.ratio) <= least_of_c5 * known) return {};
    const bool grouped = group.pulses > 1;
    const double span = (plan.shots - 1) * plan.shot_period;
    const double groups_a_dwell =
        grouped ? std::min<double>(plan.shots, std::floor(span / pattern.group_time) + 1) : plan.shots;
    const double window = std::min(t2(size.largest_subtense), pattern.rules.time_base);
    const double frames = std::ceil(window / plan.frame_period * (1 - 1e-12));
    const double dwells_counted =
        frames > 1 ? frames * static_cast<double>(dwells.size()) : dwells_within(pattern, dwells, window);
    const double count = groups_a_dwell * dwells_counted;
    TimedRatio worst = grouped && group.ratio > single.ratio ? group : single;
    worst.C5 = least_c5(pattern, size, std::max(1.0, count));
    worst.pulses = std::max(1.0, count);
    worst.ael *= worst.C5;
    worst.ratio = worst.ae / worst.ael;
    return worst;
}

constexpr std::size_t few = 64;
constexpr double many_frames = 100;  // of which one more or less makes no difference to a bound
// Classes of duration that need no closer look when a bound is enough.
constexpr double coarse_of_few = 1.02, coarse_of_many = 1.06;

// The most that one stretch of whole dwells holds, over all durations. Stretches are sorted into classes of
// duration; a class whose most energy over its least limit is not above what is known is dropped, others are
// halved.
class AverageSearch {
public:
    AverageSearch(const TimePattern& pattern, std::span<const DwellEnergy> dwells, const PartSize& size,
                  double known)
        : pattern_(pattern),
          dwells_(dwells),
          size_(size),
          retinal_(pattern.curve.mechanism == Mechanism::retinal_thermal),
          t2_(t2(size.subtense)),
          shortest_(shortest_duration(size.side)),
          known_(known) {
        for (const DwellEnergy& dwell : dwells) frame_energy_ += pattern.plan.shots * dwell.energy;
    }

    TimedRatio run() {
        if (!(shortest_ <= pattern_.rules.time_base)) return {};
        const double period = pattern_.plan.frame_period, length = pattern_.dwell_length;
        pairs_of_shots();
        stretches(0, {length, period + length});
        // Between bounds the ratio is quasi-convex in the number of frames, and in how much of a dwell is cut
        // off: worst just before a bound or just beyond it.
        const double base = pattern_.rules.time_base;
        std::vector<double> done{0};  // numbers of frames whose stretches have been looked at
        const auto around = [&](double bound) {
            if (!(bound > 0) || bound > base) return;
            const double frames = std::floor(bound / period);
            if (size_.family && frames >= many_frames) {
                const double before = (frames + 1) * frame_energy_ / least_limit(bound - period, bound);
                suppose(std::max(before, (frames + 2) * frame_energy_ / limit(bound)), bound);
                return;
            }
            at(bound);
            beside(bound, false);
            beside(bound, true);
            for (const double n : {frames - 1, frames, frames + 1}) {
                if (std::ranges::find(done, n) != done.end()) continue;
                done.push_back(n);
                stretches(n, {length, period + length});
            }
        };
        around(shortest_);
        for (const double bend : pattern_.curve.bends)
            if (bend < small_t2) around(bend);
        for (const double end : {std::min(small_t2, base), std::min(t2_, base), base}) around(end);
        return worst_;
    }

private:
    [[nodiscard]] double limit(double duration) const {
        return part_limit(pattern_, duration,
                          duration > short_of_t2 && retinal_ ? 0 : point_limit(pattern_, duration),
                          size_.subtense, t2_);
    }

    // Least limit from `shorter` to `longer`: it grows but for small steps down where it bends.
    [[nodiscard]] double least_limit(double shorter, double longer) const {
        double least = limit(shorter);
        for (const double bend : pattern_.curve.bends)
            if (bend > shorter && bend < longer) least = std::min(least, limit(bend));
        return least;
    }

    void consider(double duration, double energy, double pulses) {
        if (duration < shortest_ || !counts(pattern_, duration)) return;
        const TimedRatio found = emission(duration, pulses, energy, limit(duration));
        if (found.ratio > known_) worst_ = found, known_ = found.ratio;
    }

    // Takes a bound for a value, where that is enough.
    void suppose(double bound, double duration) {
        if (bound > known_) worst_ = {.ratio = bound, .duration = duration}, known_ = bound;
    }

    void pairs_of_shots() {
        if (pattern_.plan.shots < 2) return;
        double strongest = 0;
        for (const DwellEnergy& dwell : dwells_) strongest = std::max(strongest, dwell.energy);
        consider(pattern_.plan.shot_period + pattern_.plan.pulse_width, 2 * strongest, 2);
    }

    // All that starts within a duration, whatever part of a dwell that is.
    void at(double duration) {
        if (duration < std::max(shortest_, pattern_.plan.pulse_width) || !counts(pattern_, duration)) return;
        const double frames = std::floor(duration / pattern_.plan.frame_period * (1 + 1e-12));
        const double least = known_ * limit(duration) - frames * frame_energy_;
        if (frame_energy_ <= least) return;
        const Within rest =
            most_within(pattern_, dwells_, std::max(0.0, duration - frames * pattern_.plan.frame_period));
        const double pulses =
            frames * static_cast<double>(dwells_.size()) * pattern_.plan.shots + rest.pulses;
        consider(duration, frames * frame_energy_ + rest.energy, pulses);
    }

    // The longest windows of at most a duration, or the shortest of at least it: opened by the first shot of
    // a dwell or closed by the last shot of one. Among many dwells a part of one matters little.
    void beside(double duration, bool beyond) {
        const FiringPlan& plan = pattern_.plan;
        if ((!beyond && duration < plan.pulse_width) || dwells_.size() > few) return;
        const double last_shot = (plan.shots - 1) * plan.shot_period,
                     apart = std::max(0.0, duration - plan.pulse_width);
        const double frames = std::floor(apart / plan.frame_period),
                     rest = apart - frames * plan.frame_period;
        if ((frames + 2) * frame_energy_ <= known_ * limit(std::max(duration, plan.pulse_width))) return;
        const std::size_t count = dwells_.size();
        const auto time = [&](std::size_t i) {
            return start_of(pattern_, dwells_[i % count]) +
                   static_cast<double>(i / count) * plan.frame_period;
        };
        for (std::size_t first = 0; first < count; ++first)
            for (const bool ahead : {true, false}) {
                double energy = 0, pulses = 0, length = 0;
                for (std::size_t k = 0; k <= count; ++k) {
                    const std::size_t i = ahead ? first + k : first + 2 * count - k;
                    const double away = ahead ? time(i) - time(first) : time(first + 2 * count) - time(i);
                    if (!beyond && (away > rest || k == count)) break;
                    const bool whole = away + last_shot < rest;
                    const double cut = std::max(0.0, (rest - away) / plan.shot_period);
                    const double shots =
                        whole ? plan.shots
                              : std::min<double>(plan.shots, (beyond ? std::ceil(cut * (1 - 1e-12))
                                                                     : std::floor(cut * (1 + 1e-12))) +
                                                                 1);
                    energy += shots * dwells_[i % count].energy, pulses += shots,
                        length = away + (shots - 1) * plan.shot_period;
                    if (!whole) break;
                }
                const double longest = frames * plan.frame_period + length + plan.pulse_width;
                consider(beyond ? std::max(duration, longest) : longest, frames * frame_energy_ + energy,
                         frames * static_cast<double>(count) * plan.shots + pulses);
            }
    }

    // Whole frames and a stretch from the first pulse of a dwell to the last of one, its length within
    // `range`.
    void stretches(double frames, Interval range) {
        if (frames < 0) return;
        range.from =
            std::max(range.from, pattern_.dwell_length);  // never 0: halving by the root would not end
        range.to = std::min(range.to, pattern_.rules.time_base - frames * pattern_.plan.frame_period);
        search(frames, range, most_over_least(frames, range));
    }

    // Most energy over the least limit of such stretches.
    [[nodiscard]] double most_over_least(double frames, const Interval& range) const {
        const double before = frames * pattern_.plan.frame_period,
                     shorter = std::max(before + range.from, shortest_);
        if (range.from > range.to || before + range.to < shortest_) return 0;
        const double least = least_limit(shorter, before + range.to);
        if ((frames + 1) * frame_energy_ <= known_ * least) return 0;
        return (frames * frame_energy_ + most_in(range.to)) / least;
    }

    void search(double frames, const Interval& range, double bound) {
        if (bound <= known_) return;
        const double before = frames * pattern_.plan.frame_period;
        const double coarse = dwells_.size() > few ? coarse_of_many : coarse_of_few;
        if (size_.family && before + range.to <= coarse * std::max(before + range.from, shortest_)) {
            suppose(bound, before + range.to);
            return;
        }
        if (range.to <= 1.05 * range.from || range.to - range.from <= 0.01 * (before + range.from)) {
            const double least = least_limit(std::max(before + range.from, shortest_), before + range.to);
            each_stretch(range, [&](double duration, double energy, std::size_t count) {
                if (frames * frame_energy_ + energy <= known_ * least) return;
                const double dwells =
                    frames * static_cast<double>(dwells_.size()) + static_cast<double>(count);
                consider(before + duration, frames * frame_energy_ + energy, dwells * pattern_.plan.shots);
            });
            return;
        }
        const double middle = std::sqrt(range.from * range.to);
        const Interval shorter{range.from, middle}, longer{middle, range.to};
        const double of_shorter = most_over_least(frames, shorter),
                     of_longer = most_over_least(frames, longer);
        if (of_shorter > of_longer) search(frames, shorter, of_shorter);
        search(frames, longer, of_longer);
        if (of_shorter <= of_longer) search(frames, shorter, of_shorter);
    }

    [[nodiscard]] double time(std::size_t i) const {
        const std::size_t count = dwells_.size();
        return i < count ? start_of(pattern_, dwells_[i])
                         : start_of(pattern_, dwells_[i - count]) + pattern_.plan.frame_period;
    }
    [[nodiscard]] double energy(std::size_t i) const {
        return dwells_[i < dwells_.size() ? i : i - dwells_.size()].energy * pattern_.plan.shots;
    }

    // Most energy of whole dwells, none of them twice, that a stretch holds.
    [[nodiscard]] double most_in(double duration) const {
        const double open = duration - pattern_.dwell_length + 1e-12 * pattern_.plan.frame_period;
        double sum = 0, most = 0;
        std::size_t next = 0;
        for (std::size_t first = 0; first < dwells_.size(); ++first) {
            while (next < first + dwells_.size() && time(next) - time(first) <= open) sum += energy(next++);
            most = std::max(most, sum);
            sum -= energy(first);
        }
        return most;
    }

    // Stretches of whole dwells, none of them twice, whose length lies in the range.
    template <class Visit>
    void each_stretch(const Interval& range, const Visit& visit) const {
        const double slack = 1e-12 * pattern_.plan.frame_period, length = pattern_.dwell_length;
        double sum =
            0;  // of dwells from `first` up to but not `next`, the first that makes the stretch long enough
        std::size_t next = 0;
        for (std::size_t first = 0; first < dwells_.size(); ++first) {
            if (next < first) next = first, sum = 0;
            while (next < first + dwells_.size() && time(next) - time(first) + length < range.from - slack)
                sum += energy(next++);
            double energies = sum;
            for (std::size_t last = next; last < first + dwells_.size(); ++last) {
                energies += energy(last);
                const double duration = time(last) - time(first) + length;
                if (duration > range.to + slack) break;
                visit(duration, energies, last - first + 1);
            }
            if (next > first) sum -= energy(first);
        }
    }

    const TimePattern& pattern_;
    std::span<const DwellEnergy> dwells_;
    const PartSize& size_;
    bool retinal_;
    double t2_;
    double shortest_;
    double known_;
    double frame_energy_ = 0;
    TimedRatio worst_;
};

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
    pattern.single_limit = point(plan.pulse_width);
    pattern.group_limit = point(pattern.group_time);
    return pattern;
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
        AverageSearch(pattern, dwells, size, known[static_cast<int>(PulseCriterion::average)]).run();
    return worst;
}

}  // namespace glint
