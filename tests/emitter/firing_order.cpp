// The orders of the zones in a frame.
#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/emitter/firing_order.h>

#include <doctest/doctest.h>
#include <algorithm>
#include <limits>
#include <map>
#include <numeric>

using namespace glint;

namespace {

using Order = std::vector<int>;

EmitterArray built(const Layout& layout, const Addressing& addressing,
                   FieldSense sense = FieldSense::upright) {
    return build_array({.aperture = 1e-6, .layout = layout, .addressing = addressing}, sense, "");
}

// Every emitter is a zone.
EmitterArray raster_of(int rows, int columns) {
    return built({.kind = LayoutKind::grid, .rows = rows, .columns = columns, .pitch = 24e-6},
                 {.scheme = AddressingScheme::individual});
}

EmitterArray scattered(double side, double spacing) {
    return built({.kind = LayoutKind::scattered, .width = side, .height = side, .spacing = spacing},
                 {.scheme = AddressingScheme::individual});
}

// Emitters at these places, all of them zones of their own.
EmitterArray loose(std::vector<Vec2> places) {
    EmitterArray array{.positions = std::move(places)};
    array.zones = static_cast<int>(array.positions.size());
    array.zone_of.resize(array.positions.size());
    std::iota(array.zone_of.begin(), array.zone_of.end(), 0);
    return array;
}

bool is_permutation(Order order, int zones) {
    std::ranges::sort(order);
    for (int zone = 0; zone < zones; ++zone)
        if (zone >= static_cast<int>(order.size()) || order[zone] != zone) return false;
    return static_cast<int>(order.size()) == zones;
}

Order farthest(const EmitterArray& array) {
    return order_zones({.order = FiringOrder::farthest_next}, array);
}

std::vector<Vec2> slow_middles(const EmitterArray& array) {
    const ZoneMembers zones = members_of(array);
    std::vector<Vec2> middles;
    for (int zone = 0; zone < array.zones; ++zone) {
        Vec2 sum = Vec2::Zero();
        for (int m = zones.first[zone]; m < zones.first[zone + 1]; ++m)
            sum += array.positions[zones.members[m]];
        middles.push_back(sum / zones.count(zone));
    }
    return middles;
}

// Goes through an order and, before each step, through all zones that are left. Empty when each step took a
// farthest one, and of equal ones the lowest.
std::string fault_of_farthest(const EmitterArray& array, const Order& order) {
    if (!is_permutation(order, array.zones)) return "no permutation";
    if (order.front() != 0) return "does not begin with zone 0";
    const std::vector<Vec2> middles = slow_middles(array);
    double span = 0;
    for (const Vec2& middle : middles)
        span = std::max(span, (middle - middles.front()).cwiseAbs().maxCoeff());
    std::vector<double> gap(middles.size(), std::numeric_limits<double>::infinity());
    std::vector<bool> fired(middles.size(), false);
    for (std::size_t step = 0; step < order.size(); ++step) {
        const int taken = order[step];
        if (step > 0)
            for (int other = 0; other < array.zones; ++other) {
                if (fired[other] || other == taken) continue;
                // Distances are told apart down to 1e-9 of the span by contract; two of them may be off.
                if (gap[other] > gap[taken] + 2e-9 * span)
                    return "not the farthest at " + std::to_string(step);
                // Equal but for rounding: a few times 1e-16 of coordinates of the size of the span.
                if (other < taken && gap[other] > gap[taken] - 1e-13 * span)
                    return "not the lowest at " + std::to_string(step);
            }
        fired[taken] = true;
        for (std::size_t other = 0; other < gap.size(); ++other)
            gap[other] = std::min(gap[other], (middles[other] - middles[taken]).norm());
    }
    return {};
}

}  // namespace

TEST_CASE("every order fires every zone once, whatever the number of zones") {
    for (int rows : {1, 2, 3, 5, 8})
        for (int columns = 1; columns <= 40; ++columns) {
            const EmitterArray array = raster_of(rows, columns);
            for (const FiringOrder order :
                 {FiringOrder::raster, FiringOrder::serpentine, FiringOrder::bit_reversed,
                  FiringOrder::farthest_next, FiringOrder::shuffled})
                CHECK(is_permutation(order_zones({.order = order}, array), array.zones));
            for (const int stride : {1, 2, 3, 7, 16, 1000000})
                CHECK(is_permutation(order_zones({.order = FiringOrder::stride, .stride = stride}, array),
                                     array.zones));
        }
}

TEST_CASE("serpentine turns every other row of zones around") {
    CHECK(order_zones({.order = FiringOrder::serpentine}, raster_of(3, 4)) ==
          Order{0, 1, 2, 3, 7, 6, 5, 4, 8, 9, 10, 11});
    // Rows of zones, not of emitters.
    const EmitterArray blocks = built({.kind = LayoutKind::grid, .rows = 6, .columns = 6, .pitch = 24e-6},
                                      {.scheme = AddressingScheme::blocks, .rows = 2, .columns = 3});
    CHECK(order_zones({.order = FiringOrder::serpentine}, blocks) == Order{0, 1, 2, 5, 4, 3});
}

TEST_CASE("zones without rows have no serpentine order") {
    CHECK_THROWS_WITH_AS((void)order_zones({.order = FiringOrder::serpentine}, scattered(100e-6, 20e-6)),
                         "firing/order: zones that form no rows and columns have no serpentine order; "
                         "accepted: raster, stride, bit_reversed, farthest_next, shuffled or best",
                         Error);
}

TEST_CASE("stride fires every n-th zone, then those beside them") {
    const EmitterArray array = raster_of(2, 4);
    CHECK(order_zones({.order = FiringOrder::stride, .stride = 3}, array) == Order{0, 3, 6, 1, 4, 7, 2, 5});
    CHECK(order_zones({.order = FiringOrder::stride, .stride = 4}, array) == Order{0, 4, 1, 5, 2, 6, 3, 7});
    for (const int stride : {1, 8, 9})  // one step a zone, or one zone a pass: the raster
        CHECK(order_zones({.order = FiringOrder::stride, .stride = stride}, array) ==
              order_zones({.order = FiringOrder::raster}, array));
}

TEST_CASE("bit_reversed is the van der Corput order without the numbers that are no zone") {
    CHECK(order_zones({.order = FiringOrder::bit_reversed}, raster_of(1, 8)) ==
          Order{0, 4, 2, 6, 1, 5, 3, 7});
    CHECK(order_zones({.order = FiringOrder::bit_reversed}, raster_of(2, 3)) == Order{0, 4, 2, 1, 5, 3});
    CHECK(order_zones({.order = FiringOrder::bit_reversed}, raster_of(1, 9)) ==
          Order{0, 8, 4, 2, 6, 1, 5, 3, 7});
}

TEST_CASE("farthest_next on small chips, by hand") {
    CHECK(farthest(raster_of(1, 5)) == Order{0, 4, 2, 1, 3});
    CHECK(farthest(raster_of(9, 1)) == Order{0, 8, 4, 2, 6, 1, 3, 5, 7});
    CHECK(farthest(raster_of(3, 3)) == Order{0, 8, 2, 6, 4, 1, 3, 5, 7});
    // A lens turns the chip over, and all distances stay.
    const Layout layout{.kind = LayoutKind::hexagonal, .rows = 7, .columns = 6, .pitch = 33e-6};
    const Addressing each{.scheme = AddressingScheme::individual};
    CHECK(farthest(built(layout, each)) == farthest(built(layout, each, FieldSense::inverted)));
}

TEST_CASE("farthest_next takes a farthest zone at every step, and of equal ones the lowest") {
    const Addressing each{.scheme = AddressingScheme::individual};
    for (const int rows : {1, 4, 7, 16, 31})
        for (const int columns : {1, 4, 5, 16, 33}) {
            CAPTURE(rows);
            CAPTURE(columns);
            for (const LayoutKind kind : {LayoutKind::grid, LayoutKind::hexagonal}) {
                const EmitterArray array =
                    built({.kind = kind, .rows = rows, .columns = columns, .pitch = 7.3e-6}, each);
                CHECK(fault_of_farthest(array, farthest(array)) == "");
            }
        }
    const Layout grid{
        .kind = LayoutKind::grid, .rows = 48, .columns = 60, .pitch = 11e-6, .row_pitch = 17e-6};
    for (const AddressingScheme scheme : {AddressingScheme::blocks, AddressingScheme::interleaved}) {
        const EmitterArray array = built(grid, {.scheme = scheme, .rows = 12, .columns = 15});
        CHECK(fault_of_farthest(array, farthest(array)) == "");
    }
    const EmitterArray array = scattered(600e-6, 20e-6);
    REQUIRE(array.zones > 300);
    CHECK(fault_of_farthest(array, farthest(array)) == "");
}

TEST_CASE("farthest_next holds for clusters, lines and zones that share a middle") {
    RandomStream random(5);
    for (int trial = 0; trial < 100; ++trial) {
        std::vector<Vec2> places;
        const double flat = trial % 3 == 0 ? 0 : 1, thin = trial % 3 == 1 ? 0 : 1;
        for (std::uint64_t c = 1 + random.below(5); c > 0; --c) {
            const Vec2 heart(random.uniform(), random.uniform());
            for (std::uint64_t n = 1 + random.below(30); n > 0; --n)
                places.emplace_back(1e-3 * thin * (heart.x() + 0.01 * random.uniform()),
                                    1e-3 * flat * (heart.y() + 0.01 * random.uniform()));
        }
        const EmitterArray array = loose(std::move(places));
        CAPTURE(trial);
        CHECK(fault_of_farthest(array, farthest(array)) == "");
    }
    // Two crosses: all four zones have their middles at 0, the fifth lies aside.
    EmitterArray crosses =
        loose({{1, 0}, {0, 1}, {2, 0}, {0, 2}, {5, 5}, {-1, 0}, {0, -1}, {-2, 0}, {0, -2}});
    crosses.zone_of = {0, 1, 2, 3, 4, 0, 1, 2, 3};
    crosses.zones = 5;
    CHECK(farthest(crosses) == Order{0, 4, 1, 2, 3});
    CHECK(farthest(loose({{3, 4}, {3, 4}, {3, 4}})) == Order{0, 1, 2});
}

TEST_CASE("shuffled repeats by seed and differs with it") {
    const EmitterArray array = raster_of(2, 5);
    // From a Python version of SplitMix64 and of the Fisher-Yates shuffle, written apart from this one.
    CHECK(order_zones({.order = FiringOrder::shuffled, .seed = 7}, array) ==
          Order{9, 5, 8, 6, 1, 2, 4, 7, 0, 3});
    const EmitterArray large = raster_of(16, 16);
    CHECK(order_zones({.order = FiringOrder::shuffled, .seed = 3}, large) ==
          order_zones({.order = FiringOrder::shuffled, .seed = 3}, large));
    CHECK(order_zones({.order = FiringOrder::shuffled, .seed = 3}, large) !=
          order_zones({.order = FiringOrder::shuffled, .seed = 4}, large));
}

TEST_CASE("shuffled favours no order over the seeds") {
    const EmitterArray array = raster_of(1, 3);
    std::map<Order, int> times;
    for (int seed = 0; seed < 6000; ++seed)
        ++times[order_zones({.order = FiringOrder::shuffled, .seed = seed}, array)];
    CHECK(times.size() == 6);
    // Binomial, 1000 +- 29: within 4.5 standard deviations, which chance alone breaks once in 20 000 such
    // tests.
    for (const auto& [order, count] : times) CHECK(std::abs(count - 1000) < 130);
}
