// In which order the zones of a frame fire.
#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/emitter/firing_order.h>
#include <glint/emitter/order_score.h>

#include <fmt/format.h>
#include <algorithm>
#include <bit>
#include <cmath>
#include <limits>
#include <numeric>
#include <queue>
#include <set>
#include <utility>

namespace glint {
namespace {

std::vector<int> raster(int zones) {
    std::vector<int> sequence(static_cast<std::size_t>(zones));
    std::iota(sequence.begin(), sequence.end(), 0);
    return sequence;
}

std::vector<int> serpentine(const EmitterArray& array) {
    if (array.zone_rows == 0)
        throw Error(Problem{.what = "zones that form no rows and columns have no serpentine order",
                            .accepted = "raster, stride, bit_reversed, farthest_next, shuffled or best",
                            .path = "firing/order"});
    std::vector<int> sequence = raster(array.zones);
    for (int row = 1; row < array.zone_rows; row += 2) {
        const auto first = sequence.begin() + row * array.zone_columns;
        std::reverse(first, first + array.zone_columns);
    }
    return sequence;
}

std::vector<int> strided(int zones, int stride) {
    std::vector<int> sequence;
    for (int first = 0; first < std::min(stride, zones); ++first)
        for (int zone = first; zone < zones; zone += stride) sequence.push_back(zone);
    return sequence;
}

std::vector<int> bit_reversed(int zones) {
    const int bits = std::bit_width(static_cast<unsigned>(zones - 1));
    std::vector<int> sequence;
    for (int number = 0; number < 1 << bits; ++number) {
        int reversed = 0;
        for (int bit = 0; bit < bits; ++bit) reversed |= (number >> bit & 1) << (bits - 1 - bit);
        if (reversed < zones) sequence.push_back(reversed);
    }
    return sequence;
}

// The middles of the zones in grains of 2^-30 of the longer side of the area that these cover.
// Distances in whole grains do not carry the rounding errors that would decide between equal ones. A power of
// two, so that no fraction of that side that a raster makes lies halfway between two grains.
std::vector<Vec2> middles_in_grains(const EmitterArray& array) {
    std::vector<Vec2> middles = zone_middles(array);
    Vec2 low = middles.front(), high = low;
    for (const Vec2& middle : middles) low = low.cwiseMin(middle), high = high.cwiseMax(middle);
    const double side = (high - low).maxCoeff();
    for (Vec2& middle : middles) middle = side > 0 ? Vec2((middle - low) * (0x1p30 / side)) : Vec2::Zero();
    return middles;
}

struct Spot {
    Vec2 middle;
    int zone;
};

double across(const Spot& spot) { return spot.middle.x(); }

// The middles in bands one above the other, each band from left to right: a search visits few that are far.
struct Bands {
    double height = 1;
    std::vector<std::vector<Spot>> spots;

    [[nodiscard]] int of(double v) const {
        return static_cast<int>(std::clamp(v / height, 0.0, static_cast<double>(spots.size() - 1)));
    }
};

Bands bands_of(const std::vector<Vec2>& middles) {
    const int count = static_cast<int>(std::sqrt(static_cast<double>(middles.size())));
    double top = 0;
    for (const Vec2& middle : middles) top = std::max(top, middle.y());
    Bands bands{.height = std::max(1.0, top / count), .spots = std::vector<std::vector<Spot>>(count)};
    for (std::size_t zone = 0; zone < middles.size(); ++zone)
        bands.spots[bands.of(middles[zone].y())].push_back({middles[zone], static_cast<int>(zone)});
    for (std::vector<Spot>& band : bands.spots) std::ranges::sort(band, {}, across);
    return bands;
}

// Takes about zones * log(zones) steps where the zones lie evenly.
std::vector<int> farthest_next(const EmitterArray& array) {
    const std::vector<Vec2> middles = middles_in_grains(array);
    const Bands bands = bands_of(middles);
    // Distance of each zone to the nearest fired one. The queue holds what it was when the zone was put
    // there; distances only shrink, so a zone that comes out with its present distance is the farthest.
    std::vector<double> distance(middles.size(), std::numeric_limits<double>::infinity());
    std::priority_queue<std::pair<double, int>> queue;  // with -zone: the lowest number wins
    for (int zone = 0; zone < array.zones; ++zone) queue.emplace(distance[zone], -zone);
    std::vector<int> sequence;
    while (!queue.empty()) {
        const auto [reach, negative] = queue.top();
        const int zone = -negative;
        queue.pop();
        if (distance[zone] < reach) {
            queue.emplace(distance[zone], negative);
            continue;
        }
        sequence.push_back(zone);
        // No zone was farther than this one, so only those within its distance get a nearer neighbour.
        const Vec2 place = middles[zone];
        for (int band = bands.of(place.y() - reach); band <= bands.of(place.y() + reach); ++band) {
            const std::vector<Spot>& spots = bands.spots[band];
            auto spot = std::ranges::upper_bound(spots, place.x() - reach, {}, across);
            for (; spot != spots.end() && across(*spot) < place.x() + reach; ++spot)
                distance[spot->zone] =
                    std::min(distance[spot->zone], std::round((spot->middle - place).norm()));
        }
    }
    return sequence;
}

std::vector<int> shuffled(int zones, int seed) {
    std::vector<int> sequence = raster(zones);
    RandomStream random(static_cast<std::uint64_t>(seed));
    for (std::size_t left = sequence.size(); left > 1; --left)
        std::swap(sequence[left - 1], sequence[random.below(left)]);
    return sequence;
}

// The orders that the search for the best one starts from.
std::vector<std::vector<int>> listed_orders(const Firing& firing, const EmitterArray& array) {
    std::vector<std::vector<int>> orders{raster(array.zones)};
    if (array.zone_rows > 0) orders.push_back(serpentine(array));
    const int row = array.zone_rows > 0 ? array.zone_columns : static_cast<int>(std::sqrt(array.zones));
    for (const int stride : std::set{2, 3, 5, 7, row - 1, row + 1, 2 * row + 1, array.zones / 2})
        if (stride > 1 && stride < array.zones) orders.push_back(strided(array.zones, stride));
    orders.push_back(bit_reversed(array.zones));
    orders.push_back(farthest_next(array));
    orders.push_back(shuffled(array.zones, firing.seed));
    return orders;
}

bool matrix_can_fire_all(const std::vector<int>& order, int zones_at_once, int columns) {
    for (std::size_t first = 0; first < order.size(); first += zones_at_once)
        if (!matrix_can_fire(
                std::span(order).subspan(first, std::min<std::size_t>(zones_at_once, order.size() - first)),
                columns))
            return false;
    return true;
}

std::vector<int> best(const Firing& firing, const EmitterArray& array, const Substrate& substrate,
                      AddressingScheme scheme) {
    constexpr int most_zones = 16384, tries = 3000;
    if (array.zones > most_zones)
        throw Error(
            Problem{.what = fmt::format("{} zones are too many to search for the best order", array.zones),
                    .accepted = fmt::format("best for up to {} zones; or another order", most_zones),
                    .path = "firing/order"});
    std::vector<std::vector<int>> orders = listed_orders(firing, array);
    // Swaps would tear the sets of zones apart that a matrix can fire together.
    const bool sets = scheme == AddressingScheme::matrix && firing.zones_at_once > 1;
    if (sets) {
        std::erase_if(orders, [&](const std::vector<int>& order) {
            return !matrix_can_fire_all(order, firing.zones_at_once, array.zone_columns);
        });
        if (orders.empty()) return raster(array.zones);  // plan_firing() says what is wrong with it
    }
    return best_order(orders, firing, zone_middles(array), substrate, sets ? 0 : tries);
}

}  // namespace

bool matrix_can_fire(std::span<const int> zones, int columns) {
    std::vector<int> rows_used, columns_used;
    for (const int zone : zones) rows_used.push_back(zone / columns), columns_used.push_back(zone % columns);
    const auto distinct = [](std::vector<int>& list) {
        std::ranges::sort(list);
        return static_cast<std::size_t>(std::ranges::unique(list).begin() - list.begin());
    };
    return distinct(rows_used) * distinct(columns_used) == zones.size();
}

std::vector<int> order_zones(const Firing& firing, const EmitterArray& array, const Substrate& substrate,
                             AddressingScheme scheme) {
    switch (firing.order) {
        case FiringOrder::raster:
            return raster(array.zones);
        case FiringOrder::serpentine:
            return serpentine(array);
        case FiringOrder::stride:
            return strided(array.zones, firing.stride);
        case FiringOrder::bit_reversed:
            return bit_reversed(array.zones);
        case FiringOrder::farthest_next:
            return farthest_next(array);
        case FiringOrder::shuffled:
            return shuffled(array.zones, firing.seed);
        case FiringOrder::best:
            return best(firing, array, substrate, scheme);
    }
    return {};
}

}  // namespace glint
