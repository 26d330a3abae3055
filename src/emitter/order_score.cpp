// How good a firing order is for heat and eyes, and the search for a better one.
#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/emitter/order_score.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>
#include <utility>

namespace glint {
namespace {

constexpr int most_zones_back = 256;
constexpr double negligible = 0.01;  // share of the worst earlier dwell
constexpr double first_loss = 0.1;   // of the sum of scores, times zones, that a first swap may cost
constexpr double infinity = std::numeric_limits<double>::infinity();

struct Neighbour {
    int zone;
    double weight;
};

// The two error functions of the heat of a dwell: 1/diffusion length since its start and since its end [1/m].
struct Lag {
    double start, end;
};

// A stretch of dwells: (T/l)^-0.75 when it lies within a frame and when it runs on into the next.
struct Stretch {
    int dwells;
    double within, across;
};

// All that does not depend on the order.
struct Judge {
    std::vector<Vec2> middles;
    int zones_at_once = 1, dwells = 1;
    double diagonal = 0, pitch = 0;      // of the middles; the neighbour distance
    double pairs = 0;                    // that count for the spacing
    double heat_scale = 0;               // [m]
    std::vector<Lag> lags, lags_across;  // [dwells back], the latter where the frame ends in between
    std::vector<int> first_neighbour;    // [zones + 1]
    std::vector<Neighbour> neighbours;   // with the zone itself
    std::vector<Stretch> stretches;

    [[nodiscard]] int zones() const { return static_cast<int>(middles.size()); }
    [[nodiscard]] int dwells_back() const { return static_cast<int>(lags.size()) - 1; }
    [[nodiscard]] double distance(int a, int b) const { return (middles[a] - middles[b]).norm(); }
    [[nodiscard]] double rise(const Lag& lag, double distance) const {
        const double r = std::max(distance, pitch / 2);
        // Below 1e-17 of what a lasting source would give. Also taken when all middles coincide.
        if (!(r * lag.start < 6) || r == 0) return 0;
        return (std::erfc(r * lag.start) - std::erfc(r * lag.end)) * heat_scale / r;
    }
    [[nodiscard]] double rise(int back, bool across, double distance) const {
        return rise((across ? lags_across : lags)[back], distance);
    }
    [[nodiscard]] std::span<const Neighbour> neighbours_of(int zone) const {
        return std::span(neighbours)
            .subspan(first_neighbour[zone], first_neighbour[zone + 1] - first_neighbour[zone]);
    }
};

// Calls visit(zone, other, distance) for every two zones that lie within a reach of each other which may
// change meanwhile, once for each of the two. Sorted along the longer side, few of the others need a look.
template <class Reach, class Visit>
void visit_near(const std::vector<Vec2>& middles, const Vec2& extent, const Reach& reach,
                const Visit& visit) {
    const int axis = extent.x() >= extent.y() ? 0 : 1;
    std::vector<int> sorted(middles.size());
    std::iota(sorted.begin(), sorted.end(), 0);
    std::ranges::stable_sort(sorted, {}, [&](int zone) { return middles[zone][axis]; });
    for (std::size_t i = 0; i < sorted.size(); ++i) {
        const int zone = sorted[i];
        const auto look = [&](int other) {
            if (std::abs(middles[other][axis] - middles[zone][axis]) > reach(zone)) return false;
            const double distance = (middles[other] - middles[zone]).norm();
            if (distance <= reach(zone)) visit(zone, other, distance);
            return true;
        };
        for (std::size_t j = i; j-- > 0 && look(sorted[j]);) {
        }
        for (std::size_t j = i + 1; j < sorted.size() && look(sorted[j]); ++j) {
        }
    }
}

double neighbour_distance(const std::vector<Vec2>& middles, const Vec2& extent) {
    const double same_place = 1e-9 * extent.norm();
    std::vector<double> nearest(middles.size(), infinity);
    visit_near(
        middles, extent, [&](int zone) { return nearest[zone]; },
        [&](int zone, int, double distance) {
            if (distance > same_place) nearest[zone] = std::min(nearest[zone], distance);
        });
    const auto median = nearest.begin() + static_cast<std::ptrdiff_t>(nearest.size() / 2);
    std::ranges::nth_element(nearest, median);
    return *median < infinity ? *median : 0;
}

void find_neighbours(Judge& judge, const Vec2& extent) {
    const double reach = 4 * judge.pitch, at_reach = std::exp(-4.0);
    std::vector<std::vector<Neighbour>> near(judge.middles.size());
    for (int zone = 0; zone < judge.zones(); ++zone) near[zone].push_back({zone, 1});
    if (judge.pitch > 0)
        visit_near(
            judge.middles, extent, [&](int) { return reach; },
            [&](int zone, int other, double distance) {
                const double x = distance / (2 * judge.pitch);
                near[zone].push_back({other, (std::exp(-x * x) - at_reach) / (1 - at_reach)});
            });
    judge.first_neighbour = {0};
    for (const std::vector<Neighbour>& list : near) {
        judge.neighbours.insert(judge.neighbours.end(), list.begin(), list.end());
        judge.first_neighbour.push_back(static_cast<int>(judge.neighbours.size()));
    }
}

// How far back the heat counts, and its lags.
void find_lags(Judge& judge, const Substrate& substrate, double length, double step, double idle) {
    const auto lag_after = [&](double time) {  // since the end of the dwell
        const double end = diffusion_length(substrate.diffusivity, time);
        return Lag{1 / diffusion_length(substrate.diffusivity, time + length), end > 0 ? 1 / end : infinity};
    };
    // Point sources carry 1/(2 pi k r).
    if (judge.pitch > 0)
        judge.heat_scale =
            1 / (2 * pi * substrate.conductivity * centre_step(judge.pitch, substrate, length));
    judge.lags = judge.lags_across = {lag_after(0)};
    const int most = std::min(judge.dwells - 1, std::max(1, most_zones_back / judge.zones_at_once));
    double largest = 0;
    int last = std::min(most, 1);  // successive dwells are needed for the spacing anyhow
    for (int back = 1; back <= most; ++back) {
        judge.lags.push_back(lag_after(back * step)),
            judge.lags_across.push_back(lag_after(back * step + idle));
        const double rise = judge.rise(judge.lags[back], judge.pitch);
        largest = std::max(largest, rise);
        if (rise > 0 && rise >= negligible * largest) last = back;
    }
    judge.lags.resize(last + 1), judge.lags_across.resize(last + 1);
}

void find_stretches(Judge& judge, double length, double step, double idle) {
    const auto add = [&](int dwells) {
        const double time = ((dwells - 1) * step + length) / length;
        judge.stretches.push_back({dwells, std::pow(time, -0.75), std::pow(time + idle / length, -0.75)});
    };
    for (int dwells = 1; dwells < judge.dwells; dwells *= 2) add(dwells);
    add(judge.dwells);
}

Judge judge_of(const Firing& firing, const std::vector<Vec2>& middles, const Substrate& substrate) {
    const int zones = static_cast<int>(middles.size()), at_once = std::min(firing.zones_at_once, zones);
    Judge judge{.middles = middles, .zones_at_once = at_once, .dwells = (zones + at_once - 1) / at_once};
    Vec2 low = middles.front(), high = low;
    for (const Vec2& middle : middles) low = low.cwiseMin(middle), high = high.cwiseMax(middle);
    judge.diagonal = (high - low).norm();
    judge.pitch = neighbour_distance(middles, high - low);
    for (int dwell = 0; dwell < judge.dwells; ++dwell) {
        const auto count = [&](int d) { return std::min(at_once, zones - d * at_once); };
        const double own = count(dwell);
        judge.pairs += own * (own - 1) / 2;
        if (judge.dwells > 1) judge.pairs += own * count((dwell + 1) % judge.dwells);
    }
    find_neighbours(judge, high - low);
    const double length = firing.shots / firing.repetition, step = length + firing.gap;
    const double used = judge.dwells * step, idle = std::max(0.0, firing.frame_period.value_or(used) - used);
    find_lags(judge, substrate, length, step, idle);
    find_stretches(judge, length, step, idle);
    return judge;
}

// An order and what adds up to its scores.
struct State {
    std::vector<int> order;        // [zones] zones
    std::vector<int> position;     // [zones] of each zone in the order
    double distances = 0;          // sum over the pairs that count for the spacing [m]
    std::vector<double> heat;      // [zones]
    std::vector<double> exposure;  // [zones]
};

// Calls visit(other zone, distance) for the zones of a dwell but those at two positions.
template <class Visit>
void visit_dwell(const Judge& judge, const State& state, int dwell, int position, int except,
                 const Visit& visit) {
    const int first = dwell * judge.zones_at_once, end = std::min(first + judge.zones_at_once, judge.zones());
    for (int other = first; other < end; ++other)
        if (other != position && other != except)
            visit(state.order[other], judge.distance(state.order[position], state.order[other]));
}

// Adds (sign 1) or takes away (sign -1) all that the zone at a position and others have to do with each
// other, but the one at position `except`. With `earlier_only` just what it feels of others; each pair then
// comes once, and those of one dwell, which come from both sides, count half.
void account(const Judge& judge, State& state, int position, double sign, int except, bool earlier_only) {
    const int zone = state.order[position], dwell = position / judge.zones_at_once, dwells = judge.dwells;
    visit_dwell(judge, state, dwell, position, except, [&](int other, double distance) {
        const double rise = sign * judge.rise(0, false, distance);
        state.heat[zone] += rise;
        if (!earlier_only) state.heat[other] += rise;
        state.distances += sign * distance * (earlier_only ? 0.5 : 1.0);
    });
    for (int back = 1; back <= judge.dwells_back(); ++back) {
        const auto add = [&](int felt_by, bool across, double distance) {
            state.heat[felt_by] += sign * judge.rise(back, across, distance);
            if (back == 1) state.distances += sign * distance;
        };
        const int before = dwell - back, after = dwell + back;
        visit_dwell(judge, state, before < 0 ? before + dwells : before, position, except,
                    [&](int, double distance) { add(zone, before < 0, distance); });
        if (earlier_only) continue;
        visit_dwell(judge, state, after >= dwells ? after - dwells : after, position, except,
                    [&](int other, double distance) { add(other, after >= dwells, distance); });
    }
}

double exposure_of(const Judge& judge, const State& state, int zone) {
    struct Part {
        int dwell;
        double sum;  // of the weights before
    };
    const std::span<const Neighbour> near = judge.neighbours_of(zone);
    std::vector<std::pair<int, double>> fired;
    for (const Neighbour& other : near)
        fired.emplace_back(state.position[other.zone] / judge.zones_at_once, other.weight);
    std::ranges::sort(fired);
    std::vector<Part> parts;  // the frame twice, so that stretches may run on into the next, and an end
    double sum = 0;
    for (const int frame : {0, 1})
        for (const auto& [dwell, weight] : fired) {
            parts.push_back({dwell + frame * judge.dwells, sum});
            sum += weight;
        }
    parts.push_back({std::numeric_limits<int>::max(), sum});
    double largest = 0;
    for (const Stretch& stretch : judge.stretches) {
        // The worst stretch starts with one of the zones: without loss it can be moved to there. Where that
        // would carry its end over the frame's end, it is the last one of this frame.
        std::size_t end = 0, last = 0;
        for (std::size_t start = 0; start < fired.size(); ++start) {
            const int dwell = parts[start].dwell;
            while (parts[end].dwell < dwell + stretch.dwells) ++end;
            const bool across = dwell + stretch.dwells > judge.dwells;
            largest = std::max(
                largest, (parts[end].sum - parts[start].sum) * (across ? stretch.across : stretch.within));
            if (dwell < judge.dwells - stretch.dwells) last = start + 1;
        }
        largest = std::max(largest, (parts[fired.size()].sum - parts[last].sum) * stretch.within);
    }
    return largest;
}

State state_of(const Judge& judge, std::span<const int> order) {
    State state{.order = {order.begin(), order.end()},
                .position = std::vector<int>(order.size()),
                .heat = std::vector<double>(order.size(), 0),
                .exposure = std::vector<double>(order.size(), 0)};
    for (int position = 0; position < judge.zones(); ++position) state.position[order[position]] = position;
    for (int position = 0; position < judge.zones(); ++position) account(judge, state, position, 1, -1, true);
    for (int zone = 0; zone < judge.zones(); ++zone) state.exposure[zone] = exposure_of(judge, state, zone);
    return state;
}

OrderScore score_of(const Judge& judge, const State& state) {
    const bool spread = judge.diagonal > 0 && judge.pairs > 0;
    return {.spacing = spread ? 1 - state.distances / (judge.pairs * judge.diagonal) : 0,
            .heat = *std::ranges::max_element(state.heat),
            .exposure = *std::ranges::max_element(state.exposure)};
}

// Where the exposure may change it is put to the least it can be; expose_again() brings it up to date.
void swap_zones(const Judge& judge, State& state, int a, int b) {
    account(judge, state, a, -1, -1, false), account(judge, state, b, -1, a, false);
    std::swap(state.order[a], state.order[b]);
    for (const int position : {a, b}) state.position[state.order[position]] = position;
    account(judge, state, a, 1, -1, false), account(judge, state, b, 1, a, false);
    for (const int position : {a, b})
        for (const Neighbour& other : judge.neighbours_of(state.order[position]))
            state.exposure[other.zone] = 1;
}

// After a swap of two positions. False, and not finished, when a zone is exposed more than `most`.
bool expose_again(const Judge& judge, State& state, int a, int b, double most) {
    for (const int position : {a, b})
        for (const Neighbour& other : judge.neighbours_of(state.order[position])) {
            state.exposure[other.zone] = exposure_of(judge, state, other.zone);
            if (state.exposure[other.zone] > most) return false;
        }
    return true;
}

// A position to swap: any, that of the zone that is heated most, or one beside the zone that is exposed most.
int draw_position(const Judge& judge, const State& state, RandomStream& random) {
    switch (random.below(3)) {
        case 0:
            return state.position[std::ranges::max_element(state.heat) - state.heat.begin()];
        case 1: {
            const auto worst = std::ranges::max_element(state.exposure) - state.exposure.begin();
            const std::span<const Neighbour> near = judge.neighbours_of(static_cast<int>(worst));
            return state.position[near[random.below(near.size())].zone];
        }
        default:
            return static_cast<int>(random.below(state.order.size()));
    }
}

}  // namespace

std::vector<Vec2> zone_middles(const EmitterArray& array) {
    std::vector<Vec2> middles(static_cast<std::size_t>(array.zones), Vec2::Zero());
    std::vector<int> count(static_cast<std::size_t>(array.zones), 0);
    for (std::size_t i = 0; i < array.size(); ++i) {
        middles[array.zone_of[i]] += array.positions[i];
        ++count[array.zone_of[i]];
    }
    for (int zone = 0; zone < array.zones; ++zone) middles[zone] /= count[zone];
    return middles;
}

OrderScore score_order(std::span<const int> order, const Firing& firing, const std::vector<Vec2>& middles,
                       const Substrate& substrate) {
    const Judge judge = judge_of(firing, middles, substrate);
    return score_of(judge, state_of(judge, order));
}

double weighted(const OrderScore& score, const Firing& firing) {
    return firing.spacing_weight * score.spacing + firing.heat_weight * score.heat +
           firing.exposure_weight * score.exposure;
}

std::vector<int> best_order(const std::vector<std::vector<int>>& orders, const Firing& firing,
                            const std::vector<Vec2>& middles, const Substrate& substrate, int tries) {
    const Judge judge = judge_of(firing, middles, substrate);
    const auto total = [&](const State& state) { return weighted(score_of(judge, state), firing); };
    State state = state_of(judge, orders.front());
    for (std::size_t i = 1; i < orders.size(); ++i) {
        State other = state_of(judge, orders[i]);
        if (total(other) < total(state)) state = std::move(other);
    }
    const double start_total = total(state);
    const std::vector<int> start = state.order;
    std::vector<int> best = start;
    double best_total = start_total;
    // Swaps may lose a little, less and less, to get out of local minima (threshold accepting: Dueck and
    // Scheuer 1990).
    State trial;
    RandomStream random(static_cast<std::uint64_t>(firing.seed));
    for (int left = judge.dwells > 1 ? tries : 0; left > 0; --left) {
        const int a = draw_position(judge, state, random);
        const int b = static_cast<int>(random.below(state.order.size()));
        if (a / judge.zones_at_once == b / judge.zones_at_once) continue;
        trial = state;
        swap_zones(judge, trial, a, b);
        // The exposure takes longest: first see whether there is hope, and how much of it may be.
        const OrderScore least = score_of(judge, trial);
        const double room =
            total(state) + first_loss * left / tries / judge.zones() - weighted(least, firing);
        if (room < 0) continue;
        const double most = least.exposure + room / firing.exposure_weight;
        if (!expose_again(judge, trial, a, b, most)) continue;
        std::swap(state, trial);
        if (total(state) < best_total) best = state.order, best_total = total(state);
    }
    // Rounding errors of many swaps may have added up.
    return total(state_of(judge, best)) <= start_total ? best : start;
}

}  // namespace glint
