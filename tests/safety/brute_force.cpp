// The independent evaluator: time, parts and criteria by plain loops.
#include "brute_force.h"

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <cmath>
#include <set>

namespace glint::test {
namespace {

constexpr double mrad = 1e-3;
constexpr double smallest_side = 1.5 * mrad, largest_side = 100 * mrad;  // alpha_min; alpha_max from 0.25 s on
constexpr double equal = 1e-9;  // share by which times and sides may differ and still be the same
// Beyond so many frames a part of a frame is less than 2e-4 of all energy, and only fixed durations are tried.
constexpr double many_frames = 5000;

double nanometres(double wavelength) { return wavelength * 1e9; }

double alpha_max_of(double t) { return std::clamp(200 * std::sqrt(t), 5.0, 100.0) * mrad; }

double shortest_of(double side) {
    const double longest = std::max(0.0, side * (1 - equal) / (200 * mrad));
    return side <= 5 * mrad * (1 + equal) ? 0 : longest * longest;
}

double T2_of(double subtense) {
    return 10 * std::pow(10.0, (std::clamp(subtense / mrad, 1.5, 100.0) - 1.5) / 98.5);
}

double Ti_of(double wavelength) { return nanometres(wavelength) < 1050 ? 5e-6 : 13e-6; }

// Coefficients of the Class 1 cells for a point: below Ti [J], times t^0.75 to 10 s [J], beyond for a point [W].
struct Cells {
    double flat, rising, watt;
};

Cells cells_of(double wavelength) {
    const double nm = nanometres(wavelength);
    const double C4 = nm < 700 ? 1 : nm < 1050 ? std::pow(10.0, 0.002 * (nm - 700)) : 5;
    const double C7 = nm < 1150   ? 1
                      : nm < 1200 ? std::pow(10.0, 0.018 * (nm - 1150))
                                  : 8 + std::pow(10.0, 0.04 * (nm - 1250));
    if (nm < 1050) return {7.7e-8 * C4, 7e-4 * C4, 3.9e-4 * C4};
    return {7.7e-7 * C7, 3.5e-3 * C7, 3.9e-4 * C4 * C7};
}

double power_075(double t) { return std::sqrt(t) * std::sqrt(std::sqrt(t)); }

// 1e-11 s and longer.
double limit_of(const Cells& cells, double Ti, double t, double subtense) {
    const double C6 = std::max(1.0, subtense / smallest_side);
    if (t < Ti * (1 - equal)) return cells.flat * C6;
    const double rising = cells.rising * power_075(t) * C6;
    if (t <= Ti * (1 + equal)) return std::min(cells.flat * C6, rising);
    if (t < 10 * (1 - equal)) return rising;
    double limit = t <= 10 * (1 + equal) ? rising : 1e300;
    if (subtense <= smallest_side * (1 + equal)) return std::min(limit, cells.watt * t);
    const double T2 = T2_of(subtense);
    if (t <= T2) return rising;
    return std::min(limit, cells.rising * C6 * t / std::sqrt(std::sqrt(T2)));
}

// One stretch of the axis across or up, and how much of each spot it covers.
struct Stretch {
    double from, to;
    std::vector<double> covered;
    [[nodiscard]] double side() const { return std::max(smallest_side, to - from); }
};

// Every stretch that begins and ends at an edge of a spot or at one of a few places between, and those that have one
// end there and one of the given lengths. What is shorter than alpha_min lies in one that is as long.
std::vector<Stretch> stretches(const std::vector<BruteSpot>& image, int axis, const std::vector<double>& lengths) {
    std::vector<double> places;
    double narrowest = 1e300;
    for (const BruteSpot& spot : image) {
        places.push_back(spot.low[axis]), places.push_back(spot.high[axis]);
        narrowest = std::min(narrowest, spot.high[axis] - spot.low[axis]);
    }
    std::ranges::sort(places);
    const double first = places.front(), last = places.back(), whole = last - first;
    const auto thin_out = [&](double apart) {
        std::ranges::sort(places);
        places.erase(std::unique(places.begin(), places.end(), [&](double a, double b) { return b - a < apart; }),
                     places.end());
    };
    thin_out(2e-4 * narrowest);
    for (int i = 1; i < 5; ++i) places.push_back(first + whole * i / 5);
    std::ranges::sort(places);

    std::vector<Stretch> found;
    const auto add = [&](double from, double to) { found.push_back({from, to, {}}); };
    for (const double from : places)
        for (const double to : places)
            if (to - from >= smallest_side && to - from <= largest_side) add(from, to);
    std::set<double> tried;
    for (const double length : lengths) {
        if (!tried.insert(length).second) continue;
        if (length >= whole) {
            add(first, first + length);
            break;  // longer ones hold nothing more
        }
        for (const double at : places) {
            if (at + length <= last) add(at, at + length);
            if (at - length >= first) add(at - length, at);
        }
    }
    std::ranges::sort(found, [](const Stretch& a, const Stretch& b) {
        return a.from != b.from ? a.from < b.from : a.to < b.to;
    });
    found.erase(std::unique(found.begin(), found.end(),
                            [](const Stretch& a, const Stretch& b) { return a.from == b.from && a.to == b.to; }),
                found.end());
    for (Stretch& stretch : found)
        for (const BruteSpot& spot : image)
            stretch.covered.push_back(std::clamp((std::min(stretch.to, spot.high[axis]) -
                                                  std::max(stretch.from, spot.low[axis])) /
                                                     (spot.high[axis] - spot.low[axis]),
                                                 0.0, 1.0));
    return found;
}

// What a part holds.
struct Part {
    const Stretch *across, *up;
    double subtense, shortest;      // [rad], [s]
    double strongest = 0, all = 0;  // energy of a pulse of the strongest dwell, of all pulses of a frame [J]
    double bound = 0;
};

class Judge {
public:
    Judge(const BrutePlan& plan, const std::vector<BruteSpot>& image)
        : plan_(plan), image_(image), cells_(cells_of(plan.wavelength)), dwell_energy_(plan.groups_of_dwell.size()),
          shots_(plan.groups_of_dwell.size()) {
        Vec2 low = image.front().low, high = image.front().high;
        for (const BruteSpot& spot : image) low = low.cwiseMin(spot.low), high = high.cwiseMax(spot.high);
        const Vec2 sides = (high - low).cwiseMax(smallest_side);
        whole_subtense_ = sides.mean();
        for (const BrutePlan::Pulse& pulse : plan.pulses) ++shots_[pulse.dwell];
        most_in_group_ = most_within(plan.pulses, plan.group_time);
        double N = 0;
        for (const int groups : plan.groups_of_dwell) N += groups;
        N *= std::ceil(std::min(100.0, plan.time_base) / plan.frame);
        // Parts of single pulses are at most 5 mrad.
        least_C5_ = std::min(C5(5 * mrad, N), C5(whole_subtense_, N));
    }

    [[nodiscard]] BruteWorst worst() {
        const std::vector<Stretch> across = stretches(image_, 0, plan_.lengths);
        const std::vector<Stretch> up = stretches(image_, 1, plan_.lengths);
        std::vector<Part> parts;
        for (const Stretch& a : across)
            for (const Stretch& u : up) parts.push_back(part(a, u));
        std::ranges::sort(parts, std::greater{}, &Part::bound);
        for (const Part& p : parts) {
            if (p.bound <= worst_.ratio) break;  // and so are all that follow
            ++worst_.windows;
            judge(p);
        }
        return worst_;
    }

private:
    [[nodiscard]] double C5(double subtense, double N) const {
        return brute_C5(plan_.wavelength, plan_.pulse_width, subtense, N, plan_.time_base);
    }
    [[nodiscard]] double limit(double t, double subtense) const {
        return limit_of(cells_, plan_.group_time, t, subtense);
    }

    static int most_within(const std::vector<BrutePlan::Pulse>& pulses, double time) {
        int most = 0;
        for (std::size_t i = 0, j = 0; i < pulses.size(); ++i) {
            while (j < pulses.size() && pulses[j].start <= pulses[i].start + time * (1 + equal)) ++j;
            most = std::max(most, static_cast<int>(j - i));
        }
        return most;
    }

    void gather(const Stretch& across, const Stretch& up) {
        std::ranges::fill(dwell_energy_, 0.0);
        for (std::size_t s = 0; s < image_.size(); ++s) {
            const double energy = image_[s].energy * across.covered[s] * up.covered[s];
            if (energy > 0)
                for (const int dwell : plan_.dwells_of_zone[image_[s].zone]) dwell_energy_[dwell] += energy;
        }
    }

    Part part(const Stretch& across, const Stretch& up) {
        Part p{&across, &up, (across.side() + up.side()) / 2, shortest_of(std::max(across.side(), up.side()))};
        gather(across, up);
        double one_shot = 0;
        for (std::size_t d = 0; d < dwell_energy_.size(); ++d) {
            p.strongest = std::max(p.strongest, dwell_energy_[d]);
            one_shot += dwell_energy_[d];
            p.all += dwell_energy_[d] * shots_[d];
        }
        const double C6 = p.subtense / smallest_side;
        // Single, group and train.
        if (p.shortest == 0)
            p.bound = p.strongest *
                      std::max(1 / limit(plan_.pulse_width, p.subtense),
                               most_in_group_ / limit(plan_.group_time, p.subtense)) / least_C5_;
        // Average within about a frame: bounds are sorted from the longest duration to the shortest.
        const auto bound = std::ranges::partition_point(
            plan_.bounds, [&](const BrutePlan::Bound& b) { return b.duration >= p.shortest * (1 - equal); });
        if (bound != plan_.bounds.begin())
            p.bound = std::max(p.bound, std::min(p.strongest * (bound - 1)->any_dwells,
                                                 one_shot * (bound - 1)->one_dwell) / C6);
        // Average over more than a frame: up to one frame more than T holds, over a limit that is nowhere less than 99 % of
        // rising T^0.75 to T2. (1 + T/F)/T^0.75 is largest at an end.
        const double ends[] = {std::max(plan_.frame, p.shortest), std::min(T2_of(p.subtense), plan_.time_base)};
        for (const double T : ends)
            p.bound = std::max(p.bound, p.all * (1 + T / plan_.frame) / (0.99 * cells_.rising * C6 * power_075(T)));
        return p;
    }

    void found(const Part& p, double ae, double ael, PulseCriterion criterion, double duration, double N = 1,
               double factor = 1) {
        if (!(ae > worst_.ratio * ael * factor)) return;
        const long windows = worst_.windows;
        worst_ = {.ratio = ae / (ael * factor), .criterion = criterion, .duration = duration, .N = N, .C5 = factor,
                  .low = Vec2(p.across->from, p.up->from), .high = Vec2(p.across->to, p.up->to),
                  .subtense = p.subtense, .windows = windows};
    }

    void judge(const Part& p) {
        gather(*p.across, *p.up);
        pulses_.clear();
        for (const BrutePlan::Pulse& pulse : plan_.pulses)
            if (dwell_energy_[pulse.dwell] > 0) pulses_.push_back({pulse.start, dwell_energy_[pulse.dwell]});
        if (pulses_.empty()) return;
        const std::size_t n = pulses_.size();
        for (std::size_t i = 0; i < n; ++i) pulses_.push_back({pulses_[i].start + plan_.frame, pulses_[i].energy});
        if (p.shortest == 0) pulse_criteria(p);
        average(p, n);
    }

    // Most that starts within a time shorter than a frame; pulses start at any pulse.
    struct Most {
        double energy = 0;
        long pulses = 0;
    };
    [[nodiscard]] Most most_energy(std::size_t n, double time) const {
        Most most;
        for (std::size_t i = 0; i < n; ++i) {
            Most here;
            for (std::size_t j = i; j < i + n && pulses_[j].start <= pulses_[i].start + time * (1 + equal); ++j)
                here.energy += pulses_[j].energy, ++here.pulses;
            if (here.energy > most.energy) most = here;
        }
        return most;
    }

    void pulse_criteria(const Part& p) {
        const double single = p.strongest / limit(plan_.pulse_width, p.subtense);
        found(p, single, 1, PulseCriterion::single, plan_.pulse_width);
        double emitted = single;
        const double frames = std::floor(plan_.group_time / plan_.frame);
        Most group = most_energy(pulses_.size() / 2, plan_.group_time - frames * plan_.frame);
        group.energy += frames * p.all, group.pulses += static_cast<long>(frames);
        if (group.pulses > 1) {
            const double ratio = group.energy / limit(plan_.group_time, p.subtense);
            found(p, ratio, 1, PulseCriterion::group, plan_.group_time);
            emitted = std::max(emitted, ratio);
        }
        double N = 0;
        for (std::size_t d = 0; d < dwell_energy_.size(); ++d)
            if (dwell_energy_[d] > 0) N += plan_.groups_of_dwell[d];
        N *= std::ceil(std::min(T2_of(p.subtense), plan_.time_base) / plan_.frame);
        const double factor = std::min(C5(p.subtense, N), C5(whole_subtense_, N));
        found(p, emitted, 1, PulseCriterion::train, plan_.pulse_width, N, factor);
    }

    void average(const Part& p, std::size_t n) {
        const double F = plan_.frame, T2 = T2_of(p.subtense);
        const std::array bends{p.shortest, plan_.group_time, 10.0, T2, plan_.time_base};
        // From the start of a pulse to the end of another, with whole frames between.
        const auto hold = [&](double energy, double T) {
            if (T >= p.shortest && T <= plan_.time_base * (1 + equal))
                found(p, energy, limit(T, p.subtense), PulseCriterion::average, T);
        };
        for (std::size_t i = 0; i < n; ++i) {
            double energy = 0;
            for (std::size_t j = i; j < i + n; ++j) {
                energy += pulses_[j].energy;
                const double T = pulses_[j].start + plan_.pulse_width - pulses_[i].start;
                if (j > i) hold(energy, T);
                for (int k = 1; k <= 3; ++k) hold(energy + k * p.all, T + k * F);
                for (const double bend : bends) {
                    const double k = std::floor((bend - T) / F);
                    if (k > many_frames) continue;
                    if (k > 0) hold(energy + k * p.all, T + k * F);
                    if (k > -1) hold(energy + (k + 1) * p.all, T + (k + 1) * F);
                }
            }
        }
        // Fixed durations, and whole frames.
        std::vector<double> fixed(bends.begin(), bends.end());
        for (const double T : {10.0, T2, plan_.time_base}) fixed.push_back(F * std::floor(T / F));
        for (const double T : fixed) {
            if (!(T >= p.shortest && T > 0 && T <= plan_.time_base)) continue;
            const double k = std::floor(T / F);
            const Most most = most_energy(n, T - k * F);
            if (most.pulses + k < 2) continue;  // the average starts with a pair
            found(p, most.energy + k * p.all, limit(T, p.subtense), PulseCriterion::average, T);
        }
    }

    struct Emitted {
        double start, energy;
    };
    const BrutePlan& plan_;
    const std::vector<BruteSpot>& image_;
    Cells cells_;
    double whole_subtense_ = 0;
    double least_C5_ = 1;
    int most_in_group_ = 1;
    std::vector<double> dwell_energy_;
    std::vector<int> shots_;
    std::vector<Emitted> pulses_;  // that reach the part, two frames
    BruteWorst worst_;
};

}  // namespace
