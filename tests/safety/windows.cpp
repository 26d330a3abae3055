// The window search against arrays worked out by hand and against every window tried one by one; the bound
// above it.
#include <glint/safety/image_bound.h>
#include <glint/safety/window_search.h>
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

Spot spot(double u, double v, double half_u, double half_v, double energy, int zone = 0) {
    return {.middle = {u, v}, .half = {half_u, half_v}, .energy = energy, .zone = zone};
}

// Emitters of 0.1 mrad on a raster, one zone, 1 nJ each.
std::vector<Spot> raster(int columns, int rows, double pitch) {
    std::vector<Spot> spots;
    for (int i = 0; i < columns; ++i)
        for (int k = 0; k < rows; ++k)
            spots.push_back(spot(i * pitch, k * pitch, 0.05 * mrad, 0.05 * mrad, 1e-9));
    return spots;
}

TimePattern one_zone(double frame_period) {
    return time_pattern({.zones = {0},
                         .start = {0},
                         .shot_period = frame_period,
                         .pulse_width = 5e-9,
                         .frame_period = frame_period},
                        {.wavelength = 905 * nm});
}

WindowSearch search(const TimePattern& pattern, std::span<const Spot> spots) {
    return search_windows(pattern, spots, std::array{0}, {}, 0);
}

// Emission over C6 T2^-0.25, in emitters: the average over the time base, of pulses so dense that they are
// steady light.
double steady_value(const ImagePart& part, double period) {
    return part.worst.ratio * 7e-4 * c4(905 * nm) * part.worst.duration /
           (1e-9 * part.worst.duration / period);
}

// An image, its firing plan and rules.
struct Trial {
    std::vector<Spot> spots;
    std::vector<int> dwell_of_zone;
    FiringPlan plan;
    ExposureRules rules;
};

// 1 to `most` spots of up to four dwells, points to wide patches, on up to 150 mrad. Dwells are farther apart
// than Ti.
Trial random_trial(RandomStream& random, std::uint64_t most) {
    Trial trial;
    FiringPlan& plan = trial.plan;
    const int dwells = 1 + static_cast<int>(random.below(4));
    plan.frame_period = decade_between(random, 2e-3, 0.3);
    plan.shots = random.below(2) == 0 ? 1 : 1 + static_cast<int>(random.below(100));
    const double slot = std::max(20e-6, plan.frame_period / dwells * decade_between(random, 1e-3, 1));
    plan.shot_period = slot / plan.shots * decade_between(random, 1e-2, 1);
    plan.pulse_width = std::max(1e-10, plan.shot_period * decade_between(random, 1e-4, 0.9));
    for (int d = 0; d < dwells; ++d)
        plan.zones.push_back(d), plan.start.push_back(d * slot), trial.dwell_of_zone.push_back(d);
    constexpr double wavelengths[] = {650, 905, 1064, 1300};
    trial.rules = {.wavelength = wavelengths[random.below(4)] * nm};

    const int count = 1 + static_cast<int>(random.below(most));
    // Half of the images are of spots that overlap and are about as wide as windows can be.
    const bool overlapping = most <= 25 && random.below(2) == 0;
    const double extent = decade_between(random, 1, overlapping ? 6 : 150) * mrad;
    const double size =
        (overlapping ? uniform_between(random, 0.5, 4) : decade_between(random, 0.01, 40)) * mrad;
    for (int i = 0; i < count; ++i)
        trial.spots.push_back(
            spot(extent * random.uniform(), extent * random.uniform(), size * uniform_between(random, 0.5, 1),
                 size * uniform_between(random, 0.5, 1), decade_between(random, 0.03, 1) * 1e-9,
                 static_cast<int>(random.below(static_cast<std::uint64_t>(dwells)))));
    return trial;
}

std::string text_of(const Trial& trial) {
    std::ostringstream text;
    text.precision(12);
    text << trial.rules.wavelength << " m, frame " << trial.plan.frame_period << " s, " << trial.plan.shots
         << " shots every " << trial.plan.shot_period << " s of " << trial.plan.pulse_width
         << " s, dwells at";
    for (const double start : trial.plan.start) text << " " << start;
    text << "; spots (u v half_u half_v energy zone)";
    for (const Spot& each : trial.spots)
        text << " {" << each.middle.x() << " " << each.middle.y() << " " << each.half.x() << " "
             << each.half.y() << " " << each.energy << " " << each.zone << "}";
    return text.str();
}

struct Side {
    double low, high;
    [[nodiscard]] double clamped() const { return std::max(high - low, alpha_min); }
};

double covered(const Side& side, double middle, double half) {
    return std::clamp((std::min(side.high, middle + half) - std::max(side.low, middle - half)) / (2 * half),
                      0.0, 1.0);
}

// What windows give, by the rules alone.
class Windows {
public:
    explicit Windows(const Trial& trial) : trial_(trial), pattern_(time_pattern(trial.plan, trial.rules)) {
        for (const Spot& each : trial.spots)
            for (int a = 0; a < 2; ++a) {
                whole_[a].low = std::min(whole_[a].low, each.middle[a] - each.half[a]);
                whole_[a].high = std::max(whole_[a].high, each.middle[a] + each.half[a]);
            }
    }

    [[nodiscard]] const TimePattern& pattern() const { return pattern_; }

    // Raises `worst` to what one window gives.
    void add(Ratios& worst, const Side& u, const Side& v) const {
        std::array<double, 4> energy{};
        for (const Spot& each : trial_.spots)
            energy[static_cast<std::size_t>(trial_.dwell_of_zone[each.zone])] +=
                each.energy * covered(u, each.middle.x(), each.half.x()) *
                covered(v, each.middle.y(), each.half.y());
        const double subtense = (u.clamped() + v.clamped()) / 2;
        const double whole = (whole_[0].clamped() + whole_[1].clamped()) / 2;
        const PartSize size{.subtense = subtense,
                            .largest_subtense = subtense,
                            .side = std::max(u.clamped(), v.clamped()),
                            .whole_subtense = {whole, whole}};
        const TimedRatios found = worst_over_time(pattern_, dwells_of(energy), size, worst);
        for (std::size_t c = 0; c < 4; ++c) worst[c] = std::max(worst[c], found[c].ratio);
    }

    // Every window from the low edge of a spot to the high edge of one; or to those edges and to just inside
    // all others, where it touches one more spot.
    [[nodiscard]] Ratios between_edges(bool touching = false) const {
        Ratios worst{};
        for (const Side& u : sides(0, touching))
            for (const Side& v : sides(1, touching)) add(worst, u, v);
        return worst;
    }

    // Windows with any sides within 100 mrad, half of them with an end on an edge of a spot.
    [[nodiscard]] Ratios at_random(RandomStream& random, int count) const {
        Ratios worst{};
        const auto any = [&](int axis) {
            const Spot& each = trial_.spots[random.below(trial_.spots.size())];
            const double edge =
                each.middle[axis] +
                each.half[axis] * (random.below(2) == 0 ? -1 : uniform_between(random, -1, 1));
            const double length = decade_between(random, alpha_min, 100e-3);
            return random.below(2) == 0 ? Side{edge, edge + length} : Side{edge - length, edge};
        };
        for (int i = 0; i < count; ++i) add(worst, any(0), any(1));
        return worst;
    }

    // Whether no two edges are so near each other that the search takes them as one: a thousandth of a spot.
    [[nodiscard]] bool edges_apart() const {
        for (int a = 0; a < 2; ++a) {
            double side = 1;
            for (const Spot& each : trial_.spots) side = std::min(side, 2 * each.half[a]);
            const double apart = 1.001e-3 * std::max(side, 0.2 * alpha_min);
            for (const Spot& one : trial_.spots)
                for (const Spot& other : trial_.spots)
                    for (const int end : {-1, 1})
                        if (&one < &other && std::abs(one.middle[a] + end * one.half[a] - other.middle[a] -
                                                      end * other.half[a]) < apart)
                            return false;
        }
        return true;
    }

    // What the image bound takes as known: all light as a point, and one beam.
    [[nodiscard]] LightRatios light() const {
        std::array<double, 4> energy{};
        for (const Spot& each : trial_.spots)
            energy[static_cast<std::size_t>(trial_.dwell_of_zone[each.zone])] += each.energy;
        const TimedRatios all = worst_over_time(pattern_, dwells_of(energy), all_as_point);
        const TimedRatios one = worst_over_time(pattern_, std::array{DwellEnergy{0, 1}}, all_as_point);
        LightRatios light;
        for (std::size_t c = 0; c < 4; ++c)
            light.as_point[c] = all[c].ratio, light.per_energy[c] = one[c].ratio;
        // A shot alone is no group, but may be part of one with those of other dwells.
        if (trial_.plan.pulse_width <= pattern_.group_time)
            light.per_energy[group] = std::max(one[group].ratio, 1 / pattern_.group_limit);
        return light;
    }

private:
    static std::vector<DwellEnergy> dwells_of(const std::array<double, 4>& energy) {
        std::vector<DwellEnergy> dwells;
        for (int d = 0; d < 4; ++d)
            if (energy[static_cast<std::size_t>(d)] > 0)
                dwells.push_back({d, energy[static_cast<std::size_t>(d)]});
        return dwells;
    }

    [[nodiscard]] std::vector<Side> sides(int axis, bool touching) const {
        constexpr double hair = 1e-6;
        std::vector<double> lows, highs;
        for (const Spot& each : trial_.spots) {
            const double low = each.middle[axis] - each.half[axis],
                         high = each.middle[axis] + each.half[axis];
            lows.push_back(low), highs.push_back(high);
            if (touching)
                lows.push_back(high - hair * (high - low)), highs.push_back(low + hair * (high - low));
        }
        std::vector<Side> found;
        for (const double low : lows)
            for (const double high : highs)
                if (high > low && high - low <= 100e-3) found.push_back({low, high});
        return found;
    }

    const Trial& trial_;
    TimePattern pattern_;
    std::array<Side, 2> whole_{Side{1, -1}, Side{1, -1}};
};

Ratios search(const Windows& windows, const Trial& trial, double slack, const Ratios& floor = {}) {
    const WindowSearch found =
        search_windows(windows.pattern(), trial.spots, trial.dwell_of_zone, floor, slack);
    Ratios ratios;
    for (std::size_t c = 0; c < 4; ++c) ratios[c] = found.parts[c].worst.ratio;
    // A pulse alone in its window counts as an average too, but is searched for as a single one.
    ratios[average] = std::max(ratios[average], ratios[single]);
    return ratios;
}

void check_at_least(const Ratios& found, const Ratios& slow, double share) {
    for (std::size_t c = 0; c < 4; ++c) {
        CAPTURE(c);
        CHECK(found[c] >= slow[c] * share);
    }
}

}  // namespace

TEST_CASE("dense array, one pulse: the whole of it governs") {
    // Derived (A1): 10 x 10 emitters of 0.1 mrad at 0.5 mrad; emitters over subtense in 1/mrad for windows of
    // k x k.
    constexpr double value[] = {0.667, 2.667, 6, 10, 11.90, 13.85, 15.81, 17.78, 19.76, 21.74};
    for (int k = 1; k <= 10; ++k) {
        const ImagePart part = search(one_zone(1), raster(k, k, 0.5 * mrad)).parts[single];
        const double limit_per_mrad = 7.7e-8 * c4(905 * nm) / 1.5;
        CHECK(part.worst.ratio * limit_per_mrad / 1e-9 == about(value[k - 1], 5e-4));  // four digits printed
        CHECK(part.subtense == about(std::max(1.5, 0.5 * (k - 1) + 0.1) * mrad, 1e-9));
    }
}

TEST_CASE("sparse array, steady light: one emitter, or the whole once it is large") {
    // Derived (A2): 10 x 10 emitters at 10 mrad; emitters over C6 T2^-0.25 for windows of k x k, the largest
    // of which governs. One emitter is a point: the printed 3.9e-4 W, not 7e-4 * 10^-0.25.
    constexpr double value[] = {1.7783, 1.1109, 1.3315, 1.6758, 2.0838,
                                2.5463, 3.0630, 3.6363, 4.2701, 4.9687};
    constexpr double one_emitter = 7 / 3.9;
    constexpr double period = 1e-6;
    for (int k = 1; k <= 10; ++k) {
        const ImagePart part = search(one_zone(period), raster(k, k, 10 * mrad)).parts[average];
        const bool whole = value[k - 1] > one_emitter;
        CHECK(steady_value(part, period) == about(whole ? value[k - 1] : one_emitter, 3e-5));
        CHECK(part.subtense == about(whole ? (10 * (k - 1) + 0.1) * mrad : alpha_min, 1e-9));
    }
}

TEST_CASE("sparse line, steady light: one emitter governs") {
    // Derived (A3): a line of up to 10 emitters at 10 mrad gives 1.7783 (1), 0.9432 (2), 0.7150 (6), 0.7545
    // (10).
    constexpr double period = 1e-6;
    for (const bool upright : {false, true}) {
        const ImagePart part =
            search(one_zone(period), raster(upright ? 1 : 10, upright ? 10 : 1, 10 * mrad)).parts[average];
        CHECK(steady_value(part, period) == about(7 / 3.9, 3e-5));
        CHECK(part.subtense == about(alpha_min, 1e-9));
    }
}

TEST_CASE("sparse array, one pulse: alpha_max holds one emitter only") {
    // Derived (A4): 5 mrad below 625 us; the limit of each emitter is that of a point, however many there
    // are.
    for (const int k : {1, 4, 10}) {
        const ImagePart part = search(one_zone(1), raster(k, k, 10 * mrad)).parts[single];
        CHECK(part.worst.ae == about(1e-9, 1e-12));
        CHECK(part.worst.ael == about(7.7e-8 * c4(905 * nm), 1e-12));
    }
}

TEST_CASE("of a wide even patch the largest window of the duration governs") {
    // A window of side a takes a^2 and its limit grows as a: the longest side that alpha_max allows.
    RandomStream random(60);
    for (int i = 0; i < 300; ++i) {
        const double width =
            i % 2 == 0 ? decade_between(random, 1e-9, 1e-6) : decade_between(random, 626e-6, 0.24);
        const FiringPlan plan{.zones = {0},
                              .start = {0},
                              .shots = 3,
                              .shot_period = 1.5 * width,
                              .pulse_width = width,
                              .frame_period = std::max(10 * width, 1e-4)};
        const TimePattern pattern = time_pattern(plan, {.wavelength = 905 * nm});
        const double u = uniform_between(random, -0.1, 0.1), v = uniform_between(random, -0.1, 0.1);
        const WindowSearch found = search(pattern, std::array{spot(u, v, 0.06, 0.06, 1e-9)});
        const auto expected = [&](double duration, double energy) {
            const double side = alpha_max(duration), share = side / 0.12;
            return energy * share * share /
                   class_limit(LaserClass::class_1, {905 * nm, duration, side}).energy;
        };
        CAPTURE(width);
        CHECK(found.parts[single].worst.ratio == about(expected(width, 1e-9), 1e-9));
        if (width < 1e-6) CHECK(found.parts[group].worst.ratio == about(expected(5e-6, 3e-9), 1e-9));
    }
}

TEST_CASE("the search against every window between edges of spots") {
    RandomStream random(61);
    for (int i = 0; i < 1500; ++i) {
        const Trial trial = random_trial(random, i % 50 == 0 ? 25 : 8);
        const Windows windows(trial);
        if (!windows.edges_apart()) continue;
        CAPTURE(text_of(trial));
        const Ratios slow = windows.between_edges();
        check_at_least(search(windows, trial, 0), slow, 1 - 1e-9);
        check_at_least(search(windows, trial, 0.05), slow, (1 - 1e-9) / 1.05);
        // A floor hides nothing that is above it.
        const Ratios floor{0.7 * slow[0], 1.3 * slow[1], 0.9 * slow[2], 0.8 * slow[3]};
        const Ratios above = search(windows, trial, 0, floor);
        for (std::size_t c = 0; c < 4; ++c)
            if (slow[c] > floor[c]) CHECK(above[c] >= slow[c] * (1 - 1e-9));
    }
}

TEST_CASE("the search against windows that just touch one more spot") {
    // They count its pulses. The search goes a thousandth of the narrowest spot into it.
    RandomStream random(65);
    int counted = 0;
    for (int i = 0; i < 600; ++i) {
        const Trial trial = random_trial(random, 6);
        const Windows windows(trial);
        if (!windows.edges_apart()) continue;
        CAPTURE(text_of(trial));
        const Ratios slow = windows.between_edges(true);
        check_at_least(search(windows, trial, 0), slow, 1 - 2e-3);
        if (slow[train] > windows.between_edges()[train] * 1.01) ++counted;
    }
    CHECK(counted >= 20);  // so many get worse by it
}

TEST_CASE("edges that all but coincide cost no more than half a percent") {
    // Rows and columns of spots, off their places by up to a thousandth of a spot: such edges are taken as
    // one, which makes a window up to two thousandths of a spot longer each way.
    RandomStream random(62);
    for (int i = 0; i < 500; ++i) {
        Trial trial = random_trial(random, 1);
        const Spot first = trial.spots.front();
        trial.spots.clear();
        const double pitch = first.half.minCoeff() * decade_between(random, 1, 10);
        for (int across = 0; across < 3; ++across)
            for (int up = 0; up < 3; ++up) {
                Spot each = first;
                const double off = 2e-3 * first.half.minCoeff() * random.uniform();
                each.middle += Vec2(pitch * across + off, pitch * up - off);
                each.energy *= decade_between(random, 0.3, 1);
                each.zone = static_cast<int>(random.below(trial.dwell_of_zone.size()));
                trial.spots.push_back(each);
            }
        const Windows windows(trial);
        CAPTURE(text_of(trial));
        check_at_least(search(windows, trial, 0), windows.between_edges(), 1 - 5e-3);
    }
}

TEST_CASE("no window at random is worse than what the search allows for") {
    // Over spots wider than 5 mrad lengths are tried that are 1 % apart or lie half a percent apart for the
    // plan.
    RandomStream random(63);
    for (int i = 0; i < 1000; ++i) {
        const Trial trial = random_trial(random, 8);
        const Windows windows(trial);
        CAPTURE(text_of(trial));
        check_at_least(search(windows, trial, 0), windows.at_random(random, 500), 1 - 1e-2);
    }
}

TEST_CASE("the image bound is above what the search finds") {
    RandomStream random(64);
    for (int i = 0; i < 800; ++i) {
        const Trial trial = random_trial(random, i % 100 == 0 ? 140 : 12);
        const Windows windows(trial);
        CAPTURE(text_of(trial));
        const Ratios bound =
            image_bound(windows.pattern(), trial.spots, trial.dwell_of_zone, windows.light(), {});
        const WindowSearch found =
            search_windows(windows.pattern(), trial.spots, trial.dwell_of_zone, {}, 0.01);
        for (std::size_t c = 0; c < 4; ++c) CHECK(bound[c] >= found.parts[c].worst.ratio * (1 - 1e-9));
    }
}

TEST_CASE("the image bound holds for zones that fire one shot each within Ti") {
    // Two spots 1 mrad apart that fire 1 us apart are a group, though neither is one alone.
    Trial trial{.spots = {spot(0, 0, 0.05 * mrad, 0.05 * mrad, 1e-9, 0),
                          spot(1 * mrad, 0, 0.05 * mrad, 0.05 * mrad, 1e-9, 1)},
                .dwell_of_zone = {0, 1},
                .plan = {.zones = {0, 1},
                         .start = {0, 1e-6},
                         .shot_period = 1e-6,
                         .pulse_width = 5e-9,
                         .frame_period = 1e-4},
                .rules = {.wavelength = 905 * nm}};
    const Windows windows(trial);
    const Ratios bound =
        image_bound(windows.pattern(), trial.spots, trial.dwell_of_zone, windows.light(), {});
    const Ratios found = search(windows, trial, 0);
    CHECK(found[group] ==
          about(2e-9 / class_limit(LaserClass::class_1, {905 * nm, 5e-6, alpha_min}).energy, 1e-9));
    for (const std::size_t c : {single, average, group, train}) CHECK(bound[c] >= found[c] * (1 - 1e-9));
}
