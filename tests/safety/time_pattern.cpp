// The time pattern against published rules for regular trains, and against every start and duration tried one by one.
#include "points.h"

#include <glint/core/constants.h>
#include <glint/safety/limits.h>
#include <glint/safety/time_pattern.h>

#include <algorithm>
#include <cstdio>
#include <string>
#include <vector>

using namespace glint;
using namespace glint::test;

namespace {

constexpr std::size_t single = static_cast<std::size_t>(PulseCriterion::single);
constexpr std::size_t average = static_cast<std::size_t>(PulseCriterion::average);
constexpr std::size_t group = static_cast<std::size_t>(PulseCriterion::group);
constexpr std::size_t train = static_cast<std::size_t>(PulseCriterion::train);

// A part of a large enough source: its own subtense sets the limit, that of the source N.
PartSize part_of(double subtense, double source) {
    return {.subtense = subtense, .largest_subtense = source, .side = subtense, .whole_subtense = source};
}

// One zone that sends one pulse a frame.
FiringPlan regular_train(double pulse_width, double repetition) {
    return {.zones = {0}, .start = {0}, .shot_period = 1 / repetition, .pulse_width = pulse_width, .frame_period = 1 / repetition};
}

// A firing plan, what each dwell sends into a part of some size, and the rules.
struct Trial {
    FiringPlan plan;
    ExposureRules rules;
    std::vector<DwellEnergy> dwells;
    PartSize size;
};

// From microseconds to seconds: dwells of unequal energy at irregular times, up to 200 frames in the time base.
Trial random_trial(RandomStream& random, bool small) {
    struct Light {
        double nanometres;
        Mechanism mechanism;
    };
    using enum Mechanism;
    constexpr Light lights[] = {{905, retinal_thermal}, {905, retinal_thermal}, {650, retinal_thermal}, {1064, retinal_thermal},
                                {1300, retinal_thermal}, {440, photochemical}, {1450, corneal}, {1550, corneal}, {940, ceiling}};
    constexpr double time_bases[] = {0.25, 1, 10, 30, 100};
    constexpr LaserClass classes[] = {LaserClass::class_1, LaserClass::class_3R, LaserClass::class_2};
    const Light& light = lights[random.below(std::size(lights))];
    Trial trial;
    trial.rules = {.laser_class = light.mechanism == retinal_thermal || light.mechanism == corneal
                                      ? classes[random.below(light.nanometres == 650 ? 3 : 2)] : LaserClass::class_1,
                   .wavelength = light.nanometres * nm,
                   .time_base = time_bases[random.below(std::size(time_bases))],
                   .mechanism = light.mechanism};
    FiringPlan& plan = trial.plan;
    const int dwells = 1 + static_cast<int>(random.below(6));
    plan.shots = 1 + static_cast<int>(random.below(5));
    plan.frame_period = trial.rules.time_base / decade_between(random, 0.3, 200);
    const double slot = plan.frame_period * (random.below(3) == 0 ? 1 : random.uniform()) / dwells;
    plan.shot_period = slot / plan.shots * decade_between(random, 1e-3, 0.999);
    plan.pulse_width = std::max(1e-12, plan.shot_period * decade_between(random, 1e-4, 0.999));
    const double spare = slot - plan.shots * plan.shot_period;
    for (int d = 0; d < dwells; ++d) {
        plan.zones.push_back(d);
        plan.start.push_back(d * slot + spare * random.uniform());
        if (d == 0 || random.below(4) > 0) trial.dwells.push_back({d, decade_between(random, 0.1, 1) * 1e-6});
    }
    const double subtense = random.below(4) == 0 ? 1.5e-3 : decade_between(random, 1.5e-3, small ? 5e-3 : 80e-3);
    trial.size = {.subtense = subtense,
                  .largest_subtense = subtense,
                  .side = std::min(small ? 5e-3 : 0.1, subtense * uniform_between(random, 1, 2)),
                  .whole_subtense = subtense * decade_between(random, 1, 2)};
    if (light.mechanism != retinal_thermal) trial.size.side = 0;  // no angle counts
    return trial;
}

TimedRatios fast(const Trial& trial, const Ratios& known = {}) {
    return worst_over_time(time_pattern(trial.plan, trial.rules), trial.dwells, trial.size, known);
}

// The same, slowly: a list of all pulses, every start in the first frame, every duration.
class Slow {
public:
    explicit Slow(const Trial& trial) : trial_(trial), width_(trial.plan.pulse_width) {
        const FiringPlan& plan = trial.plan;
        const double frames = std::ceil(trial.rules.time_base / plan.frame_period) + 2;
        sums_.push_back(0);
        for (int f = 0; f < frames; ++f)
            for (const DwellEnergy& dwell : trial.dwells)
                for (int k = 0; k < plan.shots; ++k) {
                    starts_.push_back(f * plan.frame_period + plan.start[dwell.dwell] + k * plan.shot_period);
                    sums_.push_back(sums_.back() + dwell.energy);
                }
        in_a_frame_ = trial.dwells.size() * static_cast<std::size_t>(plan.shots);
        strongest_ = std::ranges::max(trial.dwells, {}, &DwellEnergy::energy).energy;
    }

    [[nodiscard]] double strongest() const { return strongest_; }

    [[nodiscard]] double limit(double duration) const {
        const bool retinal = trial_.rules.mechanism == Mechanism::retinal_thermal;
        // Where the subtense does not count a source of 2 mrad has the smallest limit.
        const auto found = class_limit(trial_.rules.laser_class, {trial_.rules.wavelength, std::max(duration, 1e-13), retinal ? trial_.size.subtense : 2e-3},
                                       trial_.rules.mechanism);
        return found ? found->energy : INFINITY;
    }

    // Most energy that starts within a closed stretch.
    [[nodiscard]] double most_within(double stretch) const {
        double most = 0;
        for (std::size_t i = 0; i < in_a_frame_; ++i) most = std::max(most, sums_[first_after(starts_[i] + stretch)] - sums_[i]);
        return most;
    }

    // Largest ratio of at least `least` whole pulses, from the start of one to the end of another. A window may be
    // longer than what it holds: as long as the side asks for.
    [[nodiscard]] double whole_pulses(std::size_t least) const {
        double worst = 0;
        const double shortest = shortest_duration(trial_.size.side);
        for (std::size_t i = 0; i < in_a_frame_; ++i)
            for (std::size_t k = i + least - 1; k < starts_.size(); ++k) {
                const double duration = std::max(shortest, starts_[k] + width_ - starts_[i]);
                if (duration > trial_.rules.time_base) break;
                worst = std::max(worst, (sums_[k + 1] - sums_[i]) / limit(duration));
            }
        return worst;
    }

    // Largest ratio in windows of the durations at which the tables bend, a pulse on the edge in part (or as a whole,
    // when what starts within counts).
    [[nodiscard]] double at_bends(bool starts) const {
        double worst = 0;
        const double shortest = shortest_duration(trial_.size.side), base = trial_.rules.time_base;
        const double c4_bend = trial_.rules.wavelength < 1400 * nm ? 0.06 * c4(trial_.rules.wavelength) : 0.06;
        for (const double duration : {1e-11, 1e-9, 5e-6, 13e-6, 1e-3, 0.06, c4_bend, 0.25, 0.35, 1.0, 10.0, 100.0, t2(trial_.size.subtense), base, shortest}) {
            if (duration < shortest || duration > base || duration < width_) continue;
            worst = std::max(worst, (starts ? most_within(duration) : most_of_parts(duration)) / limit(duration));
        }
        return worst;
    }

    // Pulses, or groups of those within Ti of the first of the group, in all frames that start within T2.
    [[nodiscard]] double groups(double length) const {
        const double window = std::min(t2(trial_.size.largest_subtense), trial_.rules.time_base);
        const double frames = std::ceil(window / trial_.plan.frame_period * (1 - 1e-12));
        const std::size_t shots = static_cast<std::size_t>(trial_.plan.shots);
        double count = 0;
        for (std::size_t first = 0; first < in_a_frame_; first += shots)
            for (std::size_t i = first; i < first + shots; ++count) {
                const double start = starts_[i];
                while (i < first + shots && starts_[i] <= start + length) ++i;
            }
        return frames * count;
    }

private:
    [[nodiscard]] std::size_t first_after(double time) const {
        return static_cast<std::size_t>(std::ranges::upper_bound(starts_, time * (1 + 1e-12)) - starts_.begin());
    }

    // Energy before a time, pulses being rectangles.
    [[nodiscard]] double energy_before(double time) const {
        const std::size_t next = static_cast<std::size_t>(std::ranges::upper_bound(starts_, time) - starts_.begin());
        if (next == 0) return 0;
        return sums_[next - 1] + (sums_[next] - sums_[next - 1]) * std::min(1.0, (time - starts_[next - 1]) / width_);
    }

    [[nodiscard]] double most_of_parts(double duration) const {
        double most = 0;
        for (std::size_t i = 0; i < in_a_frame_; ++i) most = std::max(most, energy_before(starts_[i] + duration) - sums_[i]);
        for (std::size_t i = 0; i < starts_.size(); ++i) {
            const double end = starts_[i] + width_;
            if (end >= duration) most = std::max(most, sums_[i + 1] - energy_before(end - duration));
        }
        return most;
    }

    const Trial& trial_;
    double width_;
    double strongest_ = 0;
    std::size_t in_a_frame_ = 0;
    std::vector<double> starts_;
    std::vector<double> sums_;  // energy of all pulses before each
};

std::string about_trial(const Trial& trial) {
    std::string text = std::to_string(trial.rules.wavelength / nm) + " nm, " + std::string(name_of(trial.rules.laser_class)) + ", " +
                       std::string(name_of(trial.rules.mechanism));
    const auto add = [&](const char* name, double value) { char buffer[64]; std::snprintf(buffer, sizeof buffer, ", %s %.6g", name, value); text += buffer; };
    add("base", trial.rules.time_base), add("frame", trial.plan.frame_period), add("shots", trial.plan.shots), add("period", trial.plan.shot_period);
    add("width", trial.plan.pulse_width), add("subtense", trial.size.subtense), add("side", trial.size.side), add("whole", trial.size.whole_subtense);
    for (const DwellEnergy& dwell : trial.dwells) add("start", trial.plan.start[dwell.dwell]), add("energy", dwell.energy);
    return text;
}

}  // namespace

TEST_CASE("worst over time against every start and duration one by one") {
    RandomStream random(53);
    for (int i = 0; i < 1000; ++i) {
        const Trial trial = random_trial(random, true);
        const TimedRatios found = fast(trial);
        const Slow slow(trial);
        const double width = trial.plan.pulse_width, side = trial.size.side;
        CAPTURE(about_trial(trial));
        CAPTURE(i);

        const double one = side <= alpha_max(width) && width <= trial.rules.time_base ? slow.strongest() / slow.limit(width) : 0;
        CHECK(near(found[single].ratio, one, 1e-12));

        // Nothing that lies wholly within a duration is missed, and nothing is found that does not start within one.
        const double whole = slow.whole_pulses(1);
        CHECK(found[average].ratio >= slow.whole_pulses(2) * (1 - 1e-9));
        CHECK(std::max(found[single].ratio, found[average].ratio) >= std::max(whole, slow.at_bends(false)) * (1 - 1e-9));
        CHECK(found[average].ratio <= std::max(whole, slow.at_bends(true)) * (1 + 1e-9));

        const double Ti = grouping_time(trial.rules.wavelength);
        if (trial.plan.frame_period > Ti) {
            const double grouped = slow.most_within(Ti);
            const bool several_pulses = slow.groups(Ti) < slow.groups(0) || grouped > slow.strongest() * (1 + 1e-9);
            if (width <= Ti && side <= alpha_max(Ti) && Ti <= trial.rules.time_base && several_pulses)
                CHECK(near(found[group].ratio, grouped / slow.limit(Ti), 1e-12));
        }
        if (trial.rules.mechanism == Mechanism::retinal_thermal && one > 0 && width <= 0.25) {
            const bool grouped = found[group].ratio > 0;
            CHECK(found[train].pulses >= slow.groups(grouped ? Ti : 0) * (1 - 1e-9));
            CHECK(found[train].pulses <= slow.groups(0) * (1 + 1e-9));
            TrainPulse pulse{.wavelength = trial.rules.wavelength, .duration = width, .subtense = trial.size.subtense,
                             .count = found[train].pulses, .time_base = trial.rules.time_base};
            double reduction = c5(pulse);
            pulse.subtense = trial.size.whole_subtense;
            if (width > Ti) reduction = std::min(reduction, c5(pulse));
            CHECK(found[train].ratio == about(std::max(found[single].ratio, found[group].ratio) / reduction, 1e-12));
        }
    }
}
