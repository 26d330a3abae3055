// The independent evaluator: parts and criteria by plain loops.
#include "brute_force.h"
#include "brute_limits.h"

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <cmath>

namespace glint::test {
namespace {

// Beyond so many frames a part of a frame is less than 2e-4 of all energy, and only fixed durations are
// tried.
constexpr double many_frames = 5000;
constexpr double largest_of_pulses = 5e-3;  // alpha_max of single pulses and groups [rad]

// One piece of the axis across or up, and how much of each spot it covers.
struct Piece {
    double from, to;
    std::vector<double> covered;
    [[nodiscard]] double side() const { return std::max(smallest_side, to - from); }
};

void cover(Piece& piece, const std::vector<BruteSpot>& image, int axis) {
    for (const BruteSpot& spot : image) {
        const double inside = std::min(piece.to, spot.high[axis]) - std::max(piece.from, spot.low[axis]);
        piece.covered.push_back(std::max(0.0, inside) / (spot.high[axis] - spot.low[axis]));
    }
}

// Every piece that begins and ends at an edge of a spot or at one of a few places between, and those that
// have one end there and one of the given lengths. What is shorter than alpha_min lies in one that is as
// long.
std::vector<Piece> pieces(const std::vector<BruteSpot>& image, int axis, const std::vector<double>& lengths) {
    std::vector<double> begins, ends;
    double narrowest = 1e300;
    for (const BruteSpot& spot : image) {
        begins.push_back(spot.low[axis]), ends.push_back(spot.high[axis]);
        narrowest = std::min(narrowest, spot.high[axis] - spot.low[axis]);
    }
    const double first = *std::ranges::min_element(begins), last = *std::ranges::max_element(ends),
                 whole = last - first;
    // Parts that hold only a hair of a spot count its dwells in N. Of many spots, those that begin where one
    // ends, or end where one begins, are left out.
    if (image.size() <= 16) {
        std::vector<double> touching;
        for (const BruteSpot& spot : image) {
            const double hair = 1e-3 * (spot.high[axis] - spot.low[axis]);
            touching.insert(touching.end(), {spot.low[axis] + hair, spot.high[axis] - hair});
        }
        begins.insert(begins.end(), touching.begin(), touching.end());
        ends.insert(ends.end(), touching.begin(), touching.end());
    }
    for (std::vector<double>* places : {&begins, &ends}) {
        for (int i = 0; i <= 5; ++i) places->push_back(first + whole * i / 5);
        std::ranges::sort(*places);
        const auto same = [&](double p, double q) { return q - p < 2e-4 * narrowest; };
        places->erase(std::unique(places->begin(), places->end(), same), places->end());
    }

    std::vector<Piece> found;
    const auto add = [&](double from, double to) { found.push_back({from, to, {}}); };
    for (const double from : begins)
        for (const double to : ends)
            if (to - from >= smallest_side && to - from <= brute_alpha_max(1)) add(from, to);
    for (const double length : lengths) {
        if (length >= whole) {
            add(first, first + length);
            break;  // longer ones hold nothing more
        }
        for (const double from : begins)
            if (from + length <= last + 1e-9 * whole) add(from, from + length);
        for (const double to : ends)
            if (to - length >= first - 1e-9 * whole) add(to - length, to);
    }
    const auto both_ends = [](const Piece& piece) { return std::pair(piece.from, piece.to); };
    std::ranges::sort(found, {}, both_ends);
    const auto repeated = std::ranges::unique(found, {}, both_ends);
    found.erase(repeated.begin(), repeated.end());
    for (Piece& piece : found) cover(piece, image, axis);
    return found;
}

struct Part {
    const Piece *across, *up;
    double bound = 0;  // no criterion reaches more
};

struct Pulse {
    double start, energy;
};

class Judge {
public:
    Judge(const BrutePlan& plan, const std::vector<BruteSpot>& image)
        : plan_(plan),
          image_(image),
          cells_(brute_cells(plan.wavelength)),
          energies_(plan.shots_of_dwell.size()) {
        Vec2 low = image.front().low, high = image.front().high;
        for (const BruteSpot& spot : image) low = low.cwiseMin(spot.low), high = high.cwiseMax(spot.high);
        whole_subtense_ = (high - low).cwiseMax(smallest_side).mean();
    }

    // Parts in the order of what they could reach at most: first all of one piece across, then one by one.
    BruteWorst worst() {
        const std::vector<Piece> across = pieces(image_, 0, plan_.lengths),
                                 up = pieces(image_, 1, plan_.lengths);
        const Piece any{0, 0, std::vector<double>(image_.size(), 1.0)};
        worst_.parts = static_cast<long>(across.size() * up.size());
        std::vector<Part> families, parts;
        for (const Piece& a : across) families.push_back({&a, &any, bound(a, any, largest_of_pulses)});
        std::ranges::sort(families, std::greater{}, &Part::bound);
        for (const Part& family : families) {
            if (family.bound <= worst_.ratio) break;
            parts.clear();
            for (const Piece& u : up) parts.push_back({family.across, &u, bound(*family.across, u, 0)});
            std::ranges::sort(parts, std::greater{}, &Part::bound);
            for (const Part& part : parts) {
                if (part.bound <= worst_.ratio) break;
                ++worst_.tried;
                gather(*part.across, *part.up);
                judge(part);
            }
        }
        return worst_;
    }

    BruteWorst of_part(const Vec2& low, const Vec2& high) {
        Piece across{low.x(), high.x(), {}}, up{low.y(), high.y(), {}};
        cover(across, image_, 0), cover(up, image_, 1);
        gather(across, up);
        judge({&across, &up});
        return worst_;
    }

private:
    // What the dwells send into a part, and how it counts.
    void gather(const Piece& across, const Piece& up) {
        subtense_ = (across.side() + up.side()) / 2;
        shortest_ = brute_shortest(std::max(across.side(), up.side()));
        std::ranges::fill(energies_, 0.0);
        for (std::size_t s = 0; s < image_.size(); ++s) {
            const double energy = image_[s].energy * across.covered[s] * up.covered[s];
            if (energy > 0)
                for (const int dwell : plan_.dwells_of_zone[image_[s].zone]) energies_[dwell] += energy;
        }
        strongest_ = *std::ranges::max_element(energies_);
        frame_ = 0;
        for (std::size_t d = 0; d < energies_.size(); ++d) frame_ += energies_[d] * plan_.shots_of_dwell[d];
    }

    double limit(double t) const { return brute_limit(cells_, t, subtense_); }

    // N of all dwells that send something into the part, over T2 of its subtense.
    double pulses_counted(double subtense) const {
        double groups = 0;
        for (std::size_t d = 0; d < energies_.size(); ++d)
            if (energies_[d] > 0) groups += plan_.groups_of_dwell[d];
        return groups *
               std::ceil(std::min(brute_T2(subtense), plan_.time_base) / plan_.frame * (1 - equal_share));
    }

    double C5(double N) const {
        const auto of = [&](double subtense) {
            return brute_C5(plan_.wavelength, plan_.pulse_width, subtense, N, plan_.time_base);
        };
        return std::min(of(subtense_), of(whole_subtense_));
    }

    // What no emission of the part under test exceeds: pulses and groups; averages within a frame; longer
    // ones. Nor of any larger part with the same energies, when N is counted for the largest subtense.
    struct Bounds {
        double pulse = 0, within = 0, longer = 0;
    };
    Bounds bounds(double largest_subtense) const {
        if (strongest_ <= 0) return {};
        const double C6 = subtense_ / smallest_side, F = plan_.frame;
        double one_shot = 0;
        for (const double energy : energies_) one_shot += energy;
        const auto most = [&](double all, double one) { return std::min(strongest_ * all, one_shot * one); };
        Bounds bounds;
        if (shortest_ == 0)
            bounds.pulse =
                std::max(strongest_ / limit(plan_.pulse_width),
                         most(plan_.most_in_group, plan_.most_of_one_in_group) / limit(cells_.Ti)) /
                C5(pulses_counted(std::max(subtense_, largest_subtense)));
        // From the longest stretch shorter than `shortest` on.
        const auto above = std::ranges::lower_bound(plan_.stretches, shortest_ * (1 - equal_share), {},
                                                    &BrutePlan::Stretch::duration);
        if (above != plan_.stretches.end())
            bounds.within = most(above->all_over_limit, above->one_over_limit) / C6;
        if (above != plan_.stretches.begin())
            bounds.within = std::max(
                bounds.within, most((above - 1)->all_dwells, (above - 1)->one_dwell) / limit(shortest_));
        // At most one frame more than there is room for. The limit is nowhere below 99 % of rising t^0.75 to
        // T2, and (1 + t/F)/t^0.75 is largest at an end.
        for (const double t :
             {std::max(F, shortest_), std::max(F, std::min(brute_T2(subtense_), plan_.time_base))})
            bounds.longer = std::max(bounds.longer,
                                     frame_ * (1 + t / F) / (0.99 * cells_.rising * C6 * std::pow(t, 0.75)));
        return bounds;
    }

    double bound(const Piece& across, const Piece& up, double largest_subtense) {
        gather(across, up);
        const Bounds b = bounds(largest_subtense);
        return std::max({b.pulse, b.within, b.longer});
    }

    void found(const Part& part, double ae, double ael, PulseCriterion criterion, double duration,
               double N = 1, double factor = 1) {
        if (!(ae > worst_.ratio * ael * factor)) return;
        worst_ = {.ratio = ae / (ael * factor),
                  .criterion = criterion,
                  .duration = duration,
                  .N = N,
                  .C5 = factor,
                  .low = Vec2(part.across->from, part.up->from),
                  .high = Vec2(part.across->to, part.up->to),
                  .subtense = subtense_,
                  .parts = worst_.parts,
                  .tried = worst_.tried};
    }

    void judge(const Part& part) {
        pulses_.clear();
        for (const BrutePlan::Pulse& pulse : plan_.pulses)
            if (energies_[pulse.dwell] > 0) pulses_.push_back({pulse.start, energies_[pulse.dwell]});
        const std::size_t count = pulses_.size();
        for (std::size_t i = 0; i < count; ++i)
            pulses_.push_back({pulses_[i].start + plan_.frame, pulses_[i].energy});
        if (shortest_ == 0) pulse_criteria(part);
        const Bounds b = bounds(0);
        if (std::max(b.within, b.longer) <= worst_.ratio) return;
        fixed_durations(part);
        stretches(part, b.longer > worst_.ratio);
    }

    // Most that starts within a time, which begins with any pulse.
    struct Most {
        double energy = 0, pulses = 0;
    };
    Most most_within(double time) const {
        const std::size_t count = pulses_.size() / 2;
        const double frames = std::floor(time / plan_.frame);
        Most most;
        for (std::size_t i = 0; i < count; ++i) {
            Most here{frames * frame_, frames * static_cast<double>(count)};
            const double end = pulses_[i].start + (time - frames * plan_.frame) * (1 + equal_share);
            for (std::size_t j = i; j < i + count && pulses_[j].start <= end; ++j)
                here.energy += pulses_[j].energy, ++here.pulses;
            if (here.energy > most.energy) most = here;
        }
        return most;
    }

    void pulse_criteria(const Part& part) {
        double ratio = strongest_ / limit(plan_.pulse_width);
        found(part, ratio, 1, PulseCriterion::single, plan_.pulse_width);
        if (const Most group = most_within(cells_.Ti); group.pulses > 1) {
            found(part, group.energy, limit(cells_.Ti), PulseCriterion::group, cells_.Ti);
            ratio = std::max(ratio, group.energy / limit(cells_.Ti));
        }
        const double N = pulses_counted(subtense_);
        found(part, ratio, 1, PulseCriterion::train, plan_.pulse_width, N, C5(N));
    }

    // From the start of a pulse to the end of another, with whole frames between: the fewest, and as many as
    // there are just before and after every bend of the limit.
    void stretches(const Part& part, bool with_frames) {
        const double F = plan_.frame;
        const auto hold = [&](double energy, double t) {
            if (t >= shortest_ && t <= plan_.time_base * (1 + equal_share))
                found(part, energy, limit(t), PulseCriterion::average, t);
        };
        const std::array bends{shortest_, cells_.Ti, 10.0, brute_T2(subtense_), plan_.time_base};
        const std::size_t count = pulses_.size() / 2;
        for (std::size_t i = 0; i < count; ++i) {
            double energy = 0;
            for (std::size_t j = i; j < i + count; ++j) {
                energy += pulses_[j].energy;
                const double t = pulses_[j].start + plan_.pulse_width - pulses_[i].start;
                if (j > i) hold(energy, t);
                if (!with_frames) continue;
                for (int k = 1; k <= 3; ++k) hold(energy + k * frame_, t + k * F);
                for (const double bend : bends) {
                    const double k = std::floor((bend - t) / F);
                    if (k < 0 || k > many_frames) continue;
                    if (k > 3) hold(energy + k * frame_, t + k * F);
                    if (k > 2) hold(energy + (k + 1) * frame_, t + (k + 1) * F);
                }
            }
        }
    }

    void fixed_durations(const Part& part) {
        const double F = plan_.frame;
        for (const double bend : {shortest_, cells_.Ti, 10.0, brute_T2(subtense_), plan_.time_base})
            for (const double t : {bend, F * std::floor(bend / F)}) {
                if (!(t >= shortest_ && t > 0 && t <= plan_.time_base)) continue;
                // A pulse counts whole, so the duration has to hold one.
                if (t >= plan_.pulse_width)
                    found(part, most_within(t).energy, limit(t), PulseCriterion::average, t);
            }
    }

    const BrutePlan& plan_;
    const std::vector<BruteSpot>& image_;
    BruteCells cells_;
    double whole_subtense_ = 0;
    BruteWorst worst_;
    // Of the part under test:
    std::vector<double> energies_;                    // of a pulse of each dwell [J]
    double strongest_ = 0, frame_ = 0;                // of a pulse, of a frame [J]
    double subtense_ = smallest_side, shortest_ = 0;  // [rad], shortest duration its side allows [s]
    std::vector<Pulse> pulses_;                       // of two frames
};

}  // namespace

BruteWorst brute_force(const BrutePlan& plan, const std::vector<BruteSpot>& image) {
    return image.empty() ? BruteWorst{} : Judge(plan, image).worst();
}

BruteWorst brute_force_part(const BrutePlan& plan, const std::vector<BruteSpot>& image, const Vec2& low,
                            const Vec2& high) {
    return image.empty() ? BruteWorst{} : Judge(plan, image).of_part(low, high);
}

double brute_force_ratio(const Beams& beams, const FiringPlan& plan, const BruteEye& eye, double wavelength,
                         double time_base) {
    return brute_force(brute_plan(plan, wavelength, time_base), brute_image(beams, eye, plan.pulse_width))
        .ratio;
}

std::string describe(const BruteWorst& worst) {
    return fmt::format(
        "ratio {:.6g}, {}, {:.6g} s, N {}, C5 {:.4g}, {:.6g} mrad, part {:.6g} to {:.6g} by {:.6g} to {:.6g} "
        "mrad, "
        "{} of {} parts tried",
        worst.ratio, name_of(worst.criterion), worst.duration, worst.N, worst.C5, worst.subtense * 1e3,
        worst.low.x() * 1e3, worst.high.x() * 1e3, worst.low.y() * 1e3, worst.high.y() * 1e3, worst.tried,
        worst.parts);
}

}  // namespace glint::test
