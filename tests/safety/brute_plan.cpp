// The independent evaluator: the firing plan as a list of pulses.
#include "brute_force.h"
#include "brute_limits.h"

#include <algorithm>
#include <cmath>

namespace glint::test {
namespace {

// Most pulse starts within a time, for pulses in time order.
int most_within(const std::vector<double>& starts, double time) {
    int most = 0;
    for (std::size_t i = 0; i < starts.size(); ++i)
        for (std::size_t j = i; j < starts.size() && starts[j] - starts[i] <= time * (1 + equal_share); ++j)
            most = std::max(most, static_cast<int>(j - i + 1));
    return most;
}

// Pulses that fall into the same slot of Ti count as one; slots follow each other from the first pulse on.
int groups(const std::vector<double>& starts, double Ti) {
    int count = 0;
    double slot = -1;
    for (const double start : starts) {
        const double here = std::floor((start - starts.front()) / Ti * (1 + equal_share));
        if (here > slot) ++count, slot = here;
    }
    return count;
}

std::vector<BrutePlan::Stretch> stretches_of(const BrutePlan& plan) {
    std::vector<BrutePlan::Stretch> stretches;
    const std::size_t n = plan.pulses.size();
    for (std::size_t i = 0; i < n; ++i) {
        double all = 0, one = 0;
        for (std::size_t k = 0; k < n; ++k) {
            const BrutePlan::Pulse& end = plan.pulses[(i + k) % n];
            ++all;
            if (end.dwell == plan.pulses[i].dwell) ++one;
            const double start = end.start + (i + k >= n ? plan.frame : 0);
            stretches.push_back({start + plan.pulse_width - plan.pulses[i].start, all, one});
        }
    }
    std::ranges::sort(stretches, {}, &BrutePlan::Stretch::duration);
    for (std::size_t i = 1; i < stretches.size(); ++i) {
        stretches[i].all_dwells = std::max(stretches[i].all_dwells, stretches[i - 1].all_dwells);
        stretches[i].one_dwell = std::max(stretches[i].one_dwell, stretches[i - 1].one_dwell);
    }
    const BruteCells cells = brute_cells(plan.wavelength);
    double all = 0, one = 0;
    for (std::size_t i = stretches.size(); i-- > 0;) {
        BrutePlan::Stretch& s = stretches[i];
        // Fixed durations may end with the start of the last pulse. 4 %: the limit's step down at Ti; 1 %: at
        // 10 s.
        const double shortest = std::max(plan.pulse_width, s.duration - plan.pulse_width);
        const double limit = std::min(brute_limit(cells, shortest, smallest_side) / 1.04,
                                      0.99 * cells.rising * std::pow(shortest, 0.75));
        s.all_over_limit = all = std::max(all, s.all_dwells / limit);
        s.one_over_limit = one = std::max(one, s.one_dwell / limit);
    }
    return stretches;
}

// alpha_min, 5 mrad and 100 mrad; a coarse series between; alpha_max of the stretches that hold most for
// their length.
std::vector<double> lengths_of(const BrutePlan& plan) {
    std::vector<double> lengths{smallest_side, brute_alpha_max(0), brute_alpha_max(1)};
    for (int i = 1; i < 5; ++i) lengths.push_back(5e-3 * std::pow(20.0, i / 5.0));
    std::vector<BrutePlan::Stretch> candidates;
    for (const BrutePlan::Stretch& s : plan.stretches) {
        if (brute_alpha_max(s.duration) <= 5.001e-3 || brute_alpha_max(s.duration) >= 99.9e-3) continue;
        if (candidates.empty() || s.duration > 1.002 * candidates.back().duration) candidates.push_back(s);
    }
    // Energy over limit of a part that grows with alpha_max in both directions goes with t^-0.25, in one with
    // t^-0.5, in none with t^-0.75.
    for (const double power : {0.25, 0.5, 0.75}) {
        const auto worth = [&](const BrutePlan::Stretch& s) {
            return s.all_dwells * std::pow(s.duration, -power);
        };
        std::ranges::sort(candidates, std::greater{}, worth);
        for (std::size_t i = 0; i < std::min<std::size_t>(3, candidates.size()); ++i)
            lengths.push_back(brute_alpha_max(candidates[i].duration));
    }
    std::ranges::sort(lengths);
    lengths.erase(std::unique(lengths.begin(), lengths.end()), lengths.end());
    return lengths;
}

}  // namespace

BrutePlan brute_plan(const FiringPlan& firing, double wavelength, double time_base) {
    BrutePlan plan{.pulse_width = firing.pulse_width,
                   .frame = firing.frame_period,
                   .wavelength = wavelength,
                   .time_base = time_base};
    plan.dwells_of_zone.resize(static_cast<std::size_t>(*std::ranges::max_element(firing.zones) + 1));
    for (int d = 0; d < firing.dwells(); ++d) {
        std::vector<double> starts;
        for (int shot = 0; shot < firing.shots; ++shot) {
            starts.push_back(firing.start[d] + shot * firing.shot_period);
            plan.pulses.push_back({starts.back(), d});
        }
        for (const int zone : firing.zones_of(d)) plan.dwells_of_zone[zone].push_back(d);
        plan.shots_of_dwell.push_back(firing.shots);
        plan.groups_of_dwell.push_back(groups(starts, brute_Ti(wavelength)));
    }
    std::ranges::sort(plan.pulses, {}, &BrutePlan::Pulse::start);
    std::vector<double> starts;
    for (const double frame : {0.0, plan.frame})
        for (const BrutePlan::Pulse& pulse : plan.pulses) starts.push_back(pulse.start + frame);
    const double frames = std::floor(brute_Ti(wavelength) / plan.frame);
    plan.most_in_group = frames * static_cast<double>(plan.pulses.size()) +
                         most_within(starts, brute_Ti(wavelength) - frames * plan.frame);
    plan.most_of_one_in_group = (frames + 1) * firing.shots;
    plan.stretches = stretches_of(plan);
    plan.lengths = lengths_of(plan);
    return plan;
}

}  // namespace glint::test
