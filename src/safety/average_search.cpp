// The average criterion: the stretch of time that holds the most over its limit.
#include "stretch.h"

#include <algorithm>
#include <cmath>
#include <vector>

namespace glint {
namespace {

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

TimedRatio worst_average(const TimePattern& pattern, std::span<const DwellEnergy> dwells,
                         const PartSize& size, double known) {
    return AverageSearch(pattern, dwells, size, known).run();
}

}  // namespace glint
