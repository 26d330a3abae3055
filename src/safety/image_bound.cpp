// A quick bound on what any part of a retinal image can give, to leave most images unsearched.
#include <glint/safety/factors.h>
#include <glint/safety/image_bound.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <functional>
#include <vector>

namespace glint {
namespace {

// Classes of the longest side of a window: class k holds sides from longest(k - 1) to longest(k).
constexpr std::size_t classes = 20;
constexpr double widest_side = 100e-3;
constexpr std::size_t few = 400;  // spots, up to which looking at pairs is quicker than the search itself
constexpr double class_ratio = 1.2474;  // the 19th power is 100 / 1.5
constexpr double fine = 0.25e-3;        // rad, distances of spots are rounded down to this
constexpr double per_fine = (1 - 1e-12) / fine;
constexpr std::size_t fines = 402;  // up to beyond the widest side

struct Classes {
    std::array<double, classes> longest;
    std::array<unsigned char, fines> of_distance;  // first class whose longest side spans the distance

    Classes() {
        for (std::size_t k = 0; k < classes; ++k)
            longest[k] = std::min(widest_side, alpha_min * std::pow(class_ratio, k));
        longest.back() = widest_side;
        for (std::size_t i = 0; i < fines; ++i) {
            const double distance = static_cast<double>(i) * fine;
            std::size_t k = 0;
            while (k < classes && longest[k] < distance) ++k;
            of_distance[i] = static_cast<unsigned char>(k);
        }
    }
};

const Classes& side_classes() {
    static const Classes made;
    return made;
}

using EnergyByClass = std::array<double, classes>;

using ByClass = std::array<double, classes>;

// The most that lies within `longest[k]` beside any spot, to its right and above or below.
struct Neighbours {
    ByClass energy{};     // of all dwells
    ByClass one_dwell{};  // energy of the dwell of that spot alone
    ByClass spots{};
};

Neighbours neighbours_by_class(std::span<const Spot> spots, std::span<const int> dwell_of_zone,
                               double widest_spot) {
    const Classes& table = side_classes();
    struct Place {
        double u, v, energy;
        int dwell;
    };
    std::vector<Place> places;
    places.reserve(spots.size());
    for (const Spot& spot : spots)
        places.push_back({spot.middle.x(), spot.middle.y(), spot.energy, dwell_of_zone[spot.zone]});
    std::ranges::sort(places, {}, &Place::u);
    Neighbours most;
    for (std::size_t i = 0; i < places.size(); ++i) {
        std::array<double, classes + 1> all{}, same{}, number{};
        for (std::size_t j = i; j < places.size(); ++j) {
            // Windows may hold parts of spots only: middles are up to one spot farther apart than the window
            // is wide.
            const double across = places[j].u - places[i].u - widest_spot,
                         up = std::abs(places[j].v - places[i].v) - widest_spot;
            if (across > widest_side) break;
            if (up > widest_side) continue;
            const std::size_t k =
                table.of_distance[static_cast<std::size_t>(std::max({across, up, 0.0}) * per_fine)];
            all[k] += places[j].energy, ++number[k];
            if (places[j].dwell == places[i].dwell) same[k] += places[j].energy;
        }
        double sum = 0, sum_of_same = 0, count = 0;
        for (std::size_t k = 0; k < classes; ++k) {
            most.energy[k] = std::max(most.energy[k], sum += all[k]);
            most.one_dwell[k] = std::max(most.one_dwell[k], sum_of_same += same[k]);
            most.spots[k] = std::max(most.spots[k], count += number[k]);
        }
    }
    return most;
}

// Largest over the classes of sides. `ratios(k)` are those of what a window of class k holds, as a point.
template <class OfClass>
Ratios bound_of(double narrowest, const OfClass& ratios) {
    const Classes& table = side_classes();
    Ratios bound{};
    for (std::size_t k = 0; k < classes; ++k) {
        const double longest = table.longest[k], shortest = k == 0 ? alpha_min : table.longest[k - 1];
        // What a window takes of a spot grows as its sides up to the spot's, and faster than the limit does.
        const double share = std::min(1.0, longest / narrowest);
        const double subtense = (shortest + std::clamp(narrowest, alpha_min, shortest)) / 2;
        const double over_limit = share * share * growth_of_limit(alpha_min) / growth_of_limit(subtense);
        const Ratios of_class = ratios(k);
        for (std::size_t c = 0; c < 4; ++c) bound[c] = std::max(bound[c], over_limit * of_class[c]);
    }
    return bound;
}

}  // namespace

double growth_of_limit(double subtense) {
    return subtense * std::exp(-std::log(10.0) / 4 / 98.5e-3 * subtense);
}

Ratios image_bound(const TimePattern& pattern, std::span<const Spot> spots,
                   std::span<const int> dwell_of_zone, const LightRatios& light, const Ratios& known) {
    constexpr auto single = static_cast<std::size_t>(PulseCriterion::single),
                   average = static_cast<std::size_t>(PulseCriterion::average),
                   group = static_cast<std::size_t>(PulseCriterion::group),
                   train = static_cast<std::size_t>(PulseCriterion::train);
    double narrowest = 1e9, widest = 0;
    for (const Spot& spot : spots) {
        narrowest = std::min(narrowest, 2 * spot.half.minCoeff());
        widest = std::max(widest, 2 * spot.half.maxCoeff());
    }
    const Ratios by_size = bound_of(narrowest, [&](std::size_t) { return light.as_point; });
    const bool enough = std::ranges::equal(by_size, known, std::less_equal{});
    if (enough || spots.size() > few) return by_size;
    const Neighbours most = neighbours_by_class(spots, dwell_of_zone, widest);
    return bound_of(narrowest, [&](std::size_t k) {
        Ratios ratios;
        ratios[single] = light.per_energy[single] * most.one_dwell[k];
        ratios[average] = light.per_energy[average] * most.energy[k];
        ratios[group] = light.per_energy[group] * (pattern.dwells_apart ? most.one_dwell[k] : most.energy[k]);
        const double dwells = std::min<double>(most.spots[k], pattern.plan.dwells());
        const double pulse = std::max(ratios[single], ratios[group]);
        const bool matters = pulse > smallest_c5 * known[train];
        ratios[train] =
            pulse / (matters ? least_c5(pattern, dwells, side_classes().longest[k]) : smallest_c5);
        for (std::size_t c = 0; c < 4; ++c) ratios[c] = std::min(ratios[c], light.as_point[c]);
        return ratios;
    });
}

}  // namespace glint
