// The time pattern against published rules for regular trains, and against every start and duration tried one
// by one.
#include <glint/safety/limits.h>
#include <glint/safety/time_pattern.h>
#include "points.h"

#include <algorithm>
#include <array>
#include <sstream>
#include <string>
#include <vector>

using namespace glint;
using namespace glint::test;

namespace {

constexpr std::size_t single = static_cast<std::size_t>(PulseCriterion::single);
constexpr std::size_t average = static_cast<std::size_t>(PulseCriterion::average);
constexpr std::size_t group = static_cast<std::size_t>(PulseCriterion::group);
constexpr std::size_t train = static_cast<std::size_t>(PulseCriterion::train);

// A firing plan, what each dwell sends into a part of the image, the part's size, and the rules.
struct Trial {
    FiringPlan plan;
    ExposureRules rules;
    std::vector<DwellEnergy> dwells;
    PartSize size;
};

TimedRatios worst_of(const Trial& trial, const Ratios& known = {}) {
    return worst_over_time(time_pattern(trial.plan, trial.rules), trial.dwells, trial.size, known);
}

// A square part with a given side of a larger source.
PartSize part_of(double side, double source) {
    return {.subtense = side, .largest_subtense = source, .side = side, .whole_subtense = {source, source}};
}

// One zone, 1 nJ a shot, Class 1 over 100 s.
Trial one_zone(double wavelength, double pulse_width, int shots, double shot_period, double frame_period) {
    return {.plan = {.zones = {0},
                     .start = {0},
                     .shots = shots,
                     .shot_period = shot_period,
                     .pulse_width = pulse_width,
                     .frame_period = frame_period},
            .rules = {.wavelength = wavelength},
            .dwells = {{0, 1e-9}},
            .size = part_of(alpha_min, alpha_min)};
}

struct Light {
    double nanometres;
    Mechanism mechanism;
    LaserClass laser_class;
};

using enum Mechanism;
using enum LaserClass;
constexpr Light lights[] = {
    {905, retinal_thermal, class_1}, {905, retinal_thermal, class_3R}, {650, retinal_thermal, class_1},
    {650, retinal_thermal, class_2}, {1064, retinal_thermal, class_1}, {1300, retinal_thermal, class_1},
    {440, photochemical, class_1},   {1450, corneal, class_1},         {1450, corneal, class_3R},
    {1550, corneal, class_1},        {940, ceiling, class_1}};

// Dwells of unequal energy at irregular times, from microseconds to seconds; up to 200 frames in the time
// base.
Trial random_trial(RandomStream& random) {
    const Light& light = lights[random.below(std::size(lights))];
    constexpr double time_bases[] = {0.25, 1, 10, 30, 100};
    Trial trial{.rules = {.laser_class = light.laser_class,
                          .wavelength = light.nanometres * nm,
                          .time_base = light.laser_class == class_2 ? 0.25 : time_bases[random.below(5)],
                          .mechanism = light.mechanism}};
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
    if (light.mechanism != retinal_thermal) return trial;  // no angle counts
    const double least = random.below(4) == 0 ? alpha_min : decade_between(random, alpha_min, 90e-3);
    const double longer = std::min(least * uniform_between(random, 1, 2), 100e-3);
    const double subtense = (least + longer) / 2;
    const double whole = subtense * decade_between(random, 1, 2);
    trial.size = {
        .subtense = subtense, .largest_subtense = subtense, .side = longer, .whole_subtense = {whole, whole}};
    return trial;
}

std::string text_of(const Trial& trial) {
    std::ostringstream text;
    text.precision(10);
    text << name_of(trial.rules.laser_class) << ", " << name_of(trial.rules.mechanism) << ", "
         << trial.rules.wavelength << " m, base " << trial.rules.time_base << " s, frame "
         << trial.plan.frame_period << " s, " << trial.plan.shots << " shots every " << trial.plan.shot_period
         << " s of " << trial.plan.pulse_width << " s, subtense " << trial.size.subtense << ", side "
         << trial.size.side << ", whole " << trial.size.whole_subtense.to << " rad; dwells";
    for (const DwellEnergy& dwell : trial.dwells)
        text << " at " << trial.plan.start[dwell.dwell] << " s " << dwell.energy << " J,";
    return text.str();
}

// The slow evaluation: a list of all pulses, every start in the first frame, every duration.
class Slow {
public:
    explicit Slow(const Trial& trial)
        : trial_(trial), width_(trial.plan.pulse_width), shortest_(shortest_duration(trial.size.side)) {
        const FiringPlan& plan = trial.plan;
        const double base = trial.rules.time_base,
                     later = 0.06 * c4(std::min(trial.rules.wavelength, 1400 * nm));
        for (int f = 0; f < base / plan.frame_period + 2; ++f)
            for (const DwellEnergy& dwell : trial.dwells)
                for (int k = 0; k < plan.shots; ++k) {
                    starts_.push_back(f * plan.frame_period + plan.start[dwell.dwell] + k * plan.shot_period);
                    sums_.push_back(sums_.back() + dwell.energy);
                }
        in_a_frame_ = trial.dwells.size() * static_cast<std::size_t>(plan.shots);
        for (const double bend : {1e-11, 1e-9, 5e-6, 13e-6, 1e-3, 0.06, later, 0.25, 0.35, 1.0, 10.0, 100.0,
                                  t2(trial.size.subtense), base, shortest_})
            if (bend >= shortest_ && bend <= base && bend >= width_) bends_.push_back({bend, limit(bend)});
    }

    [[nodiscard]] std::size_t in_a_frame() const { return in_a_frame_; }

    [[nodiscard]] double limit(double duration) const {
        const ExposureRules& rules = trial_.rules;
        // Where the subtense does not count a source of 2 mrad has the smallest limit.
        const double subtense = rules.mechanism == retinal_thermal ? trial_.size.subtense : 2e-3;
        const EmissionWindow window{rules.wavelength, std::max(duration, 1e-13), subtense};
        const auto found = class_limit(rules.laser_class, window, rules.mechanism);
        return found ? found->energy : INFINITY;
    }

    // Most energy that starts within a closed stretch.
    [[nodiscard]] double most_within(double stretch) const {
        double most = 0;
        for (std::size_t i = 0; i < in_a_frame_; ++i)
            most = std::max(most, sums_[first_after(starts_[i] + stretch)] - sums_[i]);
        return most;
    }

    // Largest ratio of at least `least` whole pulses, from the start of one to the end of another. A window
    // may be longer than what it holds: as long as the side asks for, or up to a bend where the tables step
    // down.
    [[nodiscard]] double whole_pulses(std::size_t least) const {
        double worst = 0;
        for (std::size_t i = 0; i < in_a_frame_; ++i)
            for (std::size_t k = i + least - 1; k < starts_.size(); ++k) {
                const double duration = std::max(shortest_, starts_[k] + width_ - starts_[i]);
                if (duration > trial_.rules.time_base) break;
                double lowest = limit(duration);
                for (const Bend& bend : bends_)
                    if (bend.duration > duration) lowest = std::min(lowest, bend.limit);
                worst = std::max(worst, (sums_[k + 1] - sums_[i]) / lowest);
            }
        return worst;
    }

    // Largest ratio of all that starts within windows of the durations at which the tables bend.
    [[nodiscard]] double starts_at_bends() const {
        double worst = 0;
        for (const Bend& bend : bends_) worst = std::max(worst, most_within(bend.duration) / bend.limit);
        return worst;
    }

    // Largest number of groups that starts within a closed stretch: a group is all that starts within
    // `length` of its first pulse.
    [[nodiscard]] double groups(double stretch, double length) const {
        double most = 0;
        for (std::size_t i = 0; i < in_a_frame_; ++i) {
            double count = 0;
            for (std::size_t k = i, end = first_after(starts_[i] + stretch); k < end; ++count)
                k = first_after(starts_[k] + length);
            most = std::max(most, count);
        }
        return most;
    }

private:
    struct Bend {
        double duration, limit;
    };

    [[nodiscard]] std::size_t first_after(double time) const {
        return static_cast<std::size_t>(std::ranges::upper_bound(starts_, time * (1 + 1e-12)) -
                                        starts_.begin());
    }

    const Trial& trial_;
    double width_, shortest_;
    std::size_t in_a_frame_ = 0;
    std::vector<double> starts_;
    std::vector<double> sums_{0};  // energy of all pulses before each
    std::vector<Bend> bends_;
};

// Nothing that lies wholly within a duration is missed, and nothing is found that does not start within one.
// A pulse alone is left to its own criterion.
void check_average(const Trial& trial) {
    CAPTURE(text_of(trial));
    const TimedRatios found = worst_of(trial);
    const Slow slow(trial);
    const double whole = slow.whole_pulses(1);
    CHECK(found[average].ratio >= slow.whole_pulses(2) * (1 - 1e-9));
    CHECK(std::max(found[single].ratio, found[average].ratio) >= whole * (1 - 1e-9));
    CHECK(found[average].ratio <= std::max(whole, slow.starts_at_bends()) * (1 + 1e-9));
}

}  // namespace

TEST_CASE("regular trains of one zone: limits per pulse by the 2014 rules") {
    // Derived by hand from IEC 60825-1:2014, 4.3 f) and Tables 3 and 4 (from memory); energies per pulse in
    // J, five digits printed. The pulse is seen in alpha_max of its duration, the average in up to 100 mrad.
    struct Row {
        const char* name;
        double nanometres, width, repetition, milliradians, T2, single, average, train;
    };
    constexpr Row rows[] = {
        {"D1", 905, 5e-9, 1e3, 1.5, 10, 1.9792e-7, 1.0025e-6, 9.8960e-8},
        {"D2", 905, 5e-9, 1e4, 1.5, 10, 1.9792e-7, 1.0025e-7, 7.9168e-8},
        {"D3", 905, 5e-9, 1e5, 1.5, 10, 1.9792e-7, 1.0025e-8, 7.9168e-8},
        {"D4", 905, 5e-9, 60, 1.5, 10, 1.9792e-7, 1.6708e-5, 1.9792e-7},
        {"D6", 940, 2e-9, 1e3, 5, 10.8526, 7.7512e-7, 3.8823e-6, 3.7971e-7},
        {"D7", 940, 2e-9, 1e4, 30, 19.4688, 7.7512e-7, 2.0128e-6, 3.1005e-7},
        {"D8", 940, 100e-6, 30, 30, 19.4688, 7.0466e-6, 6.7092e-4, 1.4334e-6},
        {"D9", 940, 1e-3, 30, 6, 11.1093, 4.7551e-5, 1.5439e-4, 1.9020e-5},
        {"D10", 940, 1e-3, 30, 30, 19.4688, 5.0123e-5, 6.7092e-4, 1.0196e-5},
        {"D11", 940, 1e-3, 30, 120, 100, 5.0123e-5, 1.4855e-3, 5.0123e-5},
        {"D12", 1064, 10e-9, 1e4, 1.5, 10, 7.7000e-7, 1.9500e-7, 3.0800e-7},
    };
    constexpr double digits = 6e-5;
    for (const Row& row : rows) {
        CAPTURE(std::string(row.name));
        const double source = row.milliradians * mrad, period = 1 / row.repetition;
        Trial trial = one_zone(row.nanometres * nm, row.width, 1, period, period);
        // A part a hair below alpha_max: what is longer by rounding is not seen by the pulse.
        trial.size = part_of(std::min(source, alpha_max(row.width) * (1 - 1e-12)), source);
        const TimedRatios pulse = worst_of(trial);
        trial.size = part_of(std::min(source, 100e-3), source);
        trial.rules.durations = {1, 3e4};  // the average of many pulses; over 5 us it would be that of one
        const TimedRatios whole = worst_of(trial);
        CHECK(pulse[single].ae / pulse[single].ratio == about(row.single, digits));
        // T2 may open with one pulse and close with another: up to one more than repetition times T2.
        const double pulses = row.repetition * row.T2;
        CHECK(1e-9 / whole[average].ratio <= row.average * (1 + digits));
        CHECK(1e-9 / whole[average].ratio >= row.average * pulses / (pulses + 1) * (1 - digits));
        // N is counted upward. C5 also looks at the part itself, 6.3 mrad in D11, where the whole source
        // alone has 1.
        if (row.milliradians > 100)
            CHECK(1e-9 / pulse[train].ratio <= row.train);
        else {
            CHECK(1e-9 / pulse[train].ratio <= row.train * (1 + digits));
            CHECK(1e-9 / pulse[train].ratio >=
                  row.train * std::pow(pulses / (pulses + 1), 0.25) * (1 - digits));
        }
    }
}

TEST_CASE("a fast train of one zone, Ti group included") {
    // Derived (D5): 905 nm, 5 ns at 1 MHz, point source: Ti holds 5 pulses, limits per pulse 1.9792e-7
    // single, 1.0025e-9 average, 3.8050e-8 group, 1.5220e-8 train (2e6 groups, C5 = 0.4). A pulse that starts
    // as Ti ends counts too: 6.
    const auto check = [](const Trial& trial) {
        const TimedRatios found = worst_of(trial);
        CHECK(1e-9 / found[single].ratio == about(1.9792e-7, 5e-5));
        CHECK(1e-9 / found[average].ratio == about(1.0025e-9, 5e-5));
        CHECK(found[group].pulses == 6);
        CHECK(1e-9 / found[group].ratio == about(3.8050e-8 * 5 / 6, 5e-5));
        CHECK(found[train].C5 == 0.4);
        CHECK(1e-9 / found[train].ratio == about(1.5220e-8 * 5 / 6, 5e-5));
    };
    SUBCASE("as many shots of long frames") { check(one_zone(905 * nm, 5e-9, 10'000, 1e-6, 10e-3)); }
    SUBCASE("as frames of one shot, shorter than Ti") { check(one_zone(905 * nm, 5e-9, 1, 1e-6, 1e-6)); }
}

TEST_CASE("a burst of pulses in every frame, criterion by criterion") {
    // Derived: 940 nm, 5 mrad, 2 ns at 10 MHz in bursts of 500 us, 30 bursts a second. Limits per pulse:
    // single 7.7512e-7, 5 us group of 50 1.4902e-8, C5 = 0.4 (32,558 groups in T2) 5.9607e-9, one
    // burst 4.7123e-9 (governs), T2 2.5882e-8.
    Trial trial = one_zone(940 * nm, 2e-9, 5000, 1e-7, 1.0 / 30);
    trial.size = part_of(5 * mrad, 5 * mrad);
    const TimedRatios found = worst_of(trial);
    CHECK(1e-9 / found[single].ratio == about(7.7512e-7, 5e-5));
    CHECK(found[group].pulses == 51);  // one that starts as Ti ends included
    CHECK(1e-9 / found[group].ratio == about(1.4902e-8 * 50 / 51, 5e-5));
    CHECK(found[train].pulses == about(32'558, 2e-3));  // frames counted upward
    CHECK(1e-9 / found[train].ratio == about(5.9607e-9 * 50 / 51, 5e-5));
    CHECK(found[average].pulses == 5000);
    CHECK(1e-9 / found[average].ratio ==
          about(4.7123e-9, 2e-4));  // from the first pulse to the last 499.902 us
    trial.rules.durations = {1, 3e4};
    // A window may hold up to one burst more than the 325.6 in T2 that the vector counts.
    CHECK(1e-9 / worst_of(trial)[average].ratio == about(2.5882e-8, 3.1e-3));
}

TEST_CASE("single pulse, group and train against all pulses one by one") {
    RandomStream random(53);
    for (int i = 0; i < 2000; ++i) {
        const Trial trial = random_trial(random);
        CAPTURE(text_of(trial));
        const TimedRatios found = worst_of(trial);
        const Slow slow(trial);
        const double width = trial.plan.pulse_width, side = trial.size.side, base = trial.rules.time_base;
        const double strongest = std::ranges::max(trial.dwells, {}, &DwellEnergy::energy).energy;
        const double one = side <= alpha_max(width) && width <= base ? strongest / slow.limit(width) : 0;
        if (width < 10) CHECK(near(found[single].ratio, one, 1e-12));

        const double Ti = grouping_time(trial.rules.wavelength);
        // A group counts where it holds more than any single pulse.
        const double most = width <= Ti && side <= alpha_max(Ti) && Ti <= base ? slow.most_within(Ti) : 0;
        if (trial.plan.frame_period > Ti && width < 10)
            CHECK(near(found[group].ratio, most > strongest * (1 + 1e-9) ? most / slow.limit(Ti) : 0, 1e-12));

        if (trial.rules.mechanism != retinal_thermal || one == 0 || width > 0.25) {
            CHECK(found[train].ratio == 0);
            continue;
        }
        // N is at least the number of groups that the pulses of T2 need, and at most all pulses of frames
        // counted upward.
        const double window = std::min(t2(trial.size.subtense), base);
        CHECK(found[train].pulses >= slow.groups(window, found[group].ratio > 0 ? Ti : 0));
        CHECK(found[train].pulses <=
              std::ceil(window / trial.plan.frame_period) * static_cast<double>(slow.in_a_frame()));
        TrainPulse pulse{trial.rules.wavelength, width, trial.size.subtense, found[train].pulses, base};
        double reduction = c5(pulse);
        pulse.subtense = trial.size.whole_subtense.to;
        reduction = std::min(reduction, c5(pulse));
        CHECK(near(found[train].ratio, std::max(found[single].ratio, found[group].ratio) / reduction, 1e-12));
    }
}

TEST_CASE("no start and no duration gives more than the average found") {
    RandomStream random(54);
    for (int i = 0; i < 2000; ++i) check_average(random_trial(random));
}

TEST_CASE("frames that fit a whole number of times into 10 s or the time base") {
    for (const double period : {0.05, 0.1, 0.125, 0.2, 0.25, 0.5, 1.0, 2.5, 10.0, 50.0})
        for (const double side : {alpha_min, 20 * mrad}) {
            Trial trial = one_zone(940 * nm, 5e-9, 3, 2e-6, period);
            trial.plan.zones = {0, 1}, trial.plan.start = {0, 0.4 * period};
            trial.dwells = {{0, 1e-9}, {1, 1e-9}};
            trial.size = part_of(side, side);
            check_average(trial);
        }
}

TEST_CASE("energy within a stretch against explicit counting") {
    RandomStream random(55);
    for (int i = 0; i < 2000; ++i) {
        const Trial trial = random_trial(random);
        const TimePattern pattern = time_pattern(trial.plan, trial.rules);
        const Slow slow(trial);
        CAPTURE(text_of(trial));
        for (int k = 0; k < 10; ++k) {
            const double stretch =
                trial.plan.frame_period * (k < 5 ? random.uniform() : decade_between(random, 1e-6, 0.999));
            CHECK(energy_within(pattern, trial.dwells, stretch) == about(slow.most_within(stretch), 1e-12));
        }
    }
}

TEST_CASE("more energy, or a smaller part of a larger family, never lowers the worst ratio") {
    // The worst of all criteria: a pulse that outweighs its group is left to the single one, and so is a
    // pulse alone.
    const auto worst = [](const Trial& trial) {
        const TimedRatios found = worst_of(trial);
        return std::ranges::max(found, {}, &TimedRatio::ratio).ratio;
    };
    constexpr double printed_step = 0.3976 / 0.4;  // C5 steps up from 40^-0.25 to 0.4 at 40 pulses
    RandomStream random(56);
    for (int i = 0; i < 5000; ++i) {
        const Trial trial = random_trial(random);
        CAPTURE(text_of(trial));
        const double before = worst(trial) * (1 - 1e-12);
        Trial other = trial;
        other.dwells[random.below(other.dwells.size())].energy *= decade_between(random, 1, 10);
        CHECK(worst(other) >= before);
        other.dwells.clear();
        for (int d = 0; d < trial.plan.dwells(); ++d) {
            const auto old = std::ranges::find(trial.dwells, d, &DwellEnergy::dwell);
            other.dwells.push_back(old != trial.dwells.end() ? *old : DwellEnergy{d, 1e-7});
        }
        CHECK(worst(other) >= before * printed_step);
        if (trial.rules.mechanism != retinal_thermal) continue;
        other = trial;
        other.size.subtense = decade_between(random, alpha_min, trial.size.subtense);
        CHECK(worst(other) >= before);
        other = trial;
        other.size.largest_subtense *= decade_between(random, 1, 3);
        CHECK(worst(other) >= before * printed_step);
        // What starts within the shortest duration counts, even if it sticks out by almost its width; a
        // little longer and it would lie inside.
        other = trial;
        other.size.side = decade_between(random, alpha_min, trial.size.side);
        const double shortest = shortest_duration(trial.size.side);
        CHECK(worst(other) >= before / (1 + (shortest > 0 ? trial.plan.pulse_width / shortest : 0)));
    }
}

TEST_CASE("what is known saves work but loses nothing above it") {
    RandomStream random(57);
    for (int i = 0; i < 3000; ++i) {
        const Trial trial = random_trial(random);
        const TimedRatios all = worst_of(trial);
        Ratios known;
        for (std::size_t c = 0; c < 4; ++c) known[c] = all[c].ratio * uniform_between(random, 0.5, 1.5);
        const TimedRatios some = worst_of(trial, known);
        for (std::size_t c = 0; c < 4; ++c) {
            if (all[c].ratio > known[c])
                CHECK(some[c].ratio == all[c].ratio);
            else
                CHECK(some[c].ratio <= known[c]);
        }
    }
}

TEST_CASE("the shortest duration is the inverse of alpha_max") {
    for (const double side : {1e-3, 5e-3}) CHECK(shortest_duration(side) == 0);
    CHECK(std::isinf(shortest_duration(0.1001)));
    RandomStream random(58);
    for (int i = 0; i < 1000; ++i) {
        const double side = uniform_between(random, 5.001e-3, 99.999e-3);
        CHECK(alpha_max(shortest_duration(side)) == about(side, 1e-9));  // what counts as equal here
    }
}
