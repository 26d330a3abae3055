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
constexpr std::size_t few = 128;  // spots, up to which looking at pairs is quicker than the search itself
constexpr double class_ratio = 1.2474;  // the 19th power is 100 / 1.5
constexpr double fine = 0.25e-3;        // rad, distances of spots are rounded down to this
constexpr std::size_t fines = 402;      // up to beyond the widest side

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

// Most energy within `longest[k]` beside any spot, to its right and above or below.
std::array<double, classes> energy_by_class(std::span<const Spot> spots, double widest_spot) {
    const Classes& table = side_classes();
    struct Place {
        double u, v, energy;
    };
    std::vector<Place> places;
    places.reserve(spots.size());
    for (const Spot& spot : spots) places.push_back({spot.middle.x(), spot.middle.y(), spot.energy});
    std::ranges::sort(places, {}, &Place::u);
    std::array<double, classes> most{};
    for (std::size_t i = 0; i < places.size(); ++i) {
        std::array<double, classes + 1> sums{};
        for (std::size_t j = i; j < places.size(); ++j) {
            // Windows may hold parts of spots only: middles are up to one spot farther apart than the window
            // is wide.
            const double across = places[j].u - places[i].u - widest_spot,
                         up = std::abs(places[j].v - places[i].v) - widest_spot;
            if (across > widest_side) break;
            if (up > widest_side) continue;
            sums[table.of_distance[static_cast<std::size_t>(std::max({across, up, 0.0}) / fine)]] +=
                places[j].energy;
        }
        double sum = 0;
        for (std::size_t k = 0; k < classes; ++k) most[k] = std::max(most[k], sum += sums[k]);
    }
    return most;
}

// Largest over the classes of sides. `energy(k)` bounds what a window of class k holds.
template <class Energy>
Ratios bound_of(const LightRatios& light, double narrowest, const Energy& energy) {
    const Classes& table = side_classes();
    Ratios bound{};
    for (std::size_t k = 0; k < classes; ++k) {
        const double longest = table.longest[k], shortest = k == 0 ? alpha_min : table.longest[k - 1];
        // What a window takes of a spot grows as its sides up to the spot's, and faster than the limit does.
        const double share = std::min(1.0, longest / narrowest);
        const double subtense = (shortest + std::clamp(narrowest, alpha_min, shortest)) / 2;
        const double over_limit = share * share * growth_of_limit(alpha_min) / growth_of_limit(subtense);
        for (std::size_t c = 0; c < 4; ++c)
            bound[c] =
                std::max(bound[c], over_limit * std::min(light.as_point[c], light.per_energy[c] * energy(k)));
    }
    return bound;
}

}  // namespace

double growth_of_limit(double subtense) {
    return subtense * std::exp(-std::log(10.0) / 4 / 98.5e-3 * subtense);
}

Ratios image_bound(std::span<const Spot> spots, const LightRatios& light, const Ratios& known) {
    double narrowest = 1e9, widest = 0;
    for (const Spot& spot : spots) {
        narrowest = std::min(narrowest, 2 * spot.half.minCoeff());
        widest = std::max(widest, 2 * spot.half.maxCoeff());
    }
    const Ratios by_size = bound_of(light, narrowest, [](std::size_t) { return 1e300; });
    const bool enough = std::ranges::equal(by_size, known, std::less_equal{});
    if (enough || spots.size() > few) return by_size;
    const std::array<double, classes> energy = energy_by_class(spots, widest);
    return bound_of(light, narrowest, [&](std::size_t k) { return energy[k]; });
}

}  // namespace glint
