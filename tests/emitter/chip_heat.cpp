// Heat of whole chips: sums over arrays, the fast sums against the slow one, and balances of heat.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/emitter/chip_heat.h>
#include <glint/emitter/layout.h>

#include "about.h"

#include <doctest/doctest.h>
#include <omp.h>
#include <algorithm>
#include <cmath>
#include <numbers>

using namespace glint;

namespace {

using Values = std::vector<double>;

const Substrate bulk;
const Substrate chip100{.thickness = 100e-6};
const Substrate chip200{.thickness = 200e-6};

std::vector<Vec2> grid(int rows, int columns, double pitch, std::optional<double> row_pitch = {}) {
    return grid_layout({.rows = rows, .columns = columns, .pitch = pitch, .row_pitch = row_pitch}).positions;
}

std::vector<Vec2> hexagonal(int rows, int columns, double pitch) {
    return hexagonal_layout({.kind = LayoutKind::hexagonal, .rows = rows, .columns = columns, .pitch = pitch})
        .positions;
}

std::vector<Vec2> scattered(int count, double side, RandomStream& random) {
    std::vector<Vec2> places;
    for (int i = 0; i < count; ++i) places.emplace_back(side * random.uniform(), side * random.uniform());
    return places;
}

Values random_heat(std::size_t count, RandomStream& random) {
    Values heat(count);
    for (double& q : heat) q = random.uniform() < 0.2 ? 0 : 1e-2 * random.uniform();
    return heat;
}

// Every pair on its own [n x n], and what it makes of heats.
using Matrix = std::vector<Values>;

Matrix every_pair(const std::vector<Vec2>& places, const Substrate& substrate, double package) {
    Matrix matrix(places.size(), Values(places.size(), package));
    for (std::size_t i = 0; i < places.size(); ++i)
        for (std::size_t j = 0; j < places.size(); ++j)
            if (i != j) matrix[i][j] += coupling((places[i] - places[j]).norm(), substrate);
    return matrix;
}

Values product(const Matrix& matrix, const Values& heat) {
    Values rise(heat.size(), 0.0);
    for (std::size_t i = 0; i < heat.size(); ++i)
        for (std::size_t j = 0; j < heat.size(); ++j) rise[i] += matrix[i][j] * heat[j];
    return rise;
}

Values slow_rise(const std::vector<Vec2>& places, const Substrate& substrate, double package,
                 const Values& heat) {
    return product(every_pair(places, substrate, package), heat);
}

double greatest(const Values& values) { return *std::ranges::max_element(values); }

double farthest_apart(const Values& a, const Values& b) {
    double most = 0;
    for (std::size_t i = 0; i < a.size(); ++i) most = std::max(most, std::abs(a[i] - b[i]));
    return most;
}

// Heat of a laser diode at constant current, less its light: current [A], hot diodes shine less.
double diode_heat(double current, double temperature) {
    const double threshold = 0.9e-3 * (1 + std::pow((temperature - 300) / 90, 2));
    const double efficiency = 1.17 * std::max(0.0, 1 - (temperature - 298.15) / 230);
    const double light = std::max(0.0, efficiency * (current - threshold));
    return current * (1.55 + 65 * current) - light;
}

}  // namespace

TEST_CASE("the rise in a 16 x 16 array is that of the tables") {
    const std::vector<Vec2> places = grid(16, 16, 40e-6);
    constexpr int centre = 7 * 16 + 7, edge = 7 * 16, corner = 0;
    const auto at = [&](const Substrate& s, int place, auto on) {
        Values heat(256, 0.0);
        for (int i = 0; i < 256; ++i) heat[i] = on(i / 16, i % 16) ? 1 : 0;
        return HeatCoupling(places, s).rise_of(heat)[place];
    };
    const auto all = [](int, int) { return true; };
    const auto checkers = [](int r, int c) { return (r + c) % 2 == 0; };
    const auto every_second = [](int r, int c) { return r % 2 == 1 && c % 2 == 1; };
    const auto own_row = [](int r, int) { return r == 7; };
    const auto block = [](int r, int c) { return r >= 6 && r < 10 && c >= 6 && c < 10; };
    // K per W of each emitter, k = 46; half-space, 100 um, 200 um. Derived, to 0.1, by series cut at 1e-6:
    // one sum, 1250.348, was rounded up.
    const auto check = [&](int place, auto on, double half_space, double thin, double thick) {
        CHECK(std::abs(at(bulk, place, on) - half_space) < 0.053);
        CHECK(std::abs(at(chip100, place, on) - thin) < 0.053);
        CHECK(std::abs(at(chip200, place, on) - thick) < 0.053);
    };
    check(centre, all, 4536.7, 1030.8, 2070.4);
    check(edge, all, 3347.3, 620.6, 1250.4);
    check(corner, all, 2566.3, 363.4, 745.5);
    check(centre, checkers, 2198.5, 457.5, 971.3);
    check(centre, every_second, 1046.0, 191.0, 440.3);
    check(centre, own_row, 459.4, 203.5, 300.2);
    check(centre, block, 862.4, 529.0, 686.2);
    // 5 mW each, from the neighbours (derived).
    const Values rise = HeatCoupling(places, chip100).rise_of(Values(256, 5e-3));
    CHECK(rise[centre] == about(5.154).epsilon(1e-4));
    CHECK(rise[edge] == about(3.103).epsilon(2e-4));
    CHECK(rise[corner] == about(1.817).epsilon(3e-4));
}

TEST_CASE("half-space sums are the lattice sums of 1/n") {
    // In units of 1/(2 pi k pitch), rounded to 1e-4 (derived).
    const double unit = 1 / (2 * pi * 46 * 250e-6);
    const Values eight = HeatCoupling(grid(8, 8, 250e-6), bulk).rise_of(Values(64, 1.0));
    CHECK(std::abs(eight[3 * 8 + 3] / unit - 24.1865) < 5.1e-5);
    CHECK(std::abs(eight[0] / unit - 14.8462) < 5.1e-5);
    const Values sixteen = HeatCoupling(grid(16, 16, 250e-6), bulk).rise_of(Values(256, 1.0));
    CHECK(std::abs(sixteen[7 * 16 + 7] / unit - 52.4488) < 5.1e-5);
    CHECK(std::abs(sixteen[7 * 16] / unit - 38.6978) < 5.1e-5);
    CHECK(std::abs(sixteen[0] / unit - 29.6695) < 5.1e-5);
    // 0.335 K per mW each at the centre of 8 x 8 at 250 um (derived).
    CHECK(1e-3 * eight[3 * 8 + 3] == about(0.335).epsilon(2e-3));
}

TEST_CASE("fast sums agree with the sum over all pairs") {
    RandomStream random(3);
    for (int trial = 0; trial < 30; ++trial) {
        const int rows = 1 + static_cast<int>(random.below(12)),
                  columns = 1 + static_cast<int>(random.below(12));
        const double pitch = 20e-6 + 60e-6 * random.uniform();
        Substrate substrate;
        if (trial % 4 != 0) substrate.thickness = 10e-6 * std::pow(30, random.uniform());
        const double package = trial % 2 == 0 ? 0 : 20;
        for (const int kind : {0, 1, 2, 3}) {
            const std::vector<Vec2> places = kind == 0   ? grid(rows, columns, pitch)
                                             : kind == 1 ? grid(rows, columns, pitch, 1.37 * pitch)
                                             : kind == 2 ? hexagonal(rows, columns, pitch)
                                                         : scattered(rows * columns, 12 * pitch, random);
            CAPTURE(trial);
            CAPTURE(kind);
            const HeatCoupling coupling(places, substrate, package);
            if (places.size() > 12) CHECK(coupling.on_lattice() == (kind < 3));
            const Values heat = random_heat(places.size(), random);
            const Values slow = slow_rise(places, substrate, package, heat);
            CHECK(farthest_apart(coupling.rise_of(heat), slow) <= 1e-9 * greatest(slow));
        }
    }
}

TEST_CASE("a lattice with gaps and in any order is still one") {
    RandomStream random(8);
    std::vector<Vec2> places;
    for (const Vec2& p : hexagonal(12, 12, 30e-6))
        if (random.uniform() < 0.6) places.push_back(p + Vec2(1e-3, -2e-3));
    for (std::size_t left = places.size(); left > 1; --left)
        std::swap(places[left - 1], places[random.below(left)]);
    // Written with seven digits, as a list file may be.
    for (Vec2& p : places) p = (p * 1e12).array().round() * 1e-12;
    const HeatCoupling coupling(places, chip100);
    CHECK(coupling.on_lattice());
    const Values heat = random_heat(places.size(), random);
    const Values slow = slow_rise(places, chip100, 0, heat);
    // Half a picometre in 30 um, on either side and in either direction.
    CHECK(farthest_apart(coupling.rise_of(heat), slow) <= 5e-8 * greatest(slow));
    // A ten-thousandth of a step is too much for a lattice.
    places.front() += Vec2(1.5e-9, 0);
    CHECK_FALSE(HeatCoupling(places, chip100).on_lattice());
}

TEST_CASE("on wide chips the pair sum leaves out what does not count") {
    RandomStream random(4);
    // 3 mm of a chip on which heat reaches 0.29 mm; also a line, and clusters a metre apart.
    const Substrate thin{.thickness = 20e-6};
    std::vector<Vec2> line, clusters = scattered(300, 1e-4, random);
    for (int i = 0; i < 300; ++i) line.emplace_back(3e-3 * random.uniform(), 0);
    for (int i = 0; i < 300; ++i) clusters.push_back(clusters[i] + Vec2(1, i % 2));
    for (const std::vector<Vec2>& places : {scattered(900, 3e-3, random), line, clusters}) {
        const HeatCoupling coupling(places, thin);
        CHECK_FALSE(coupling.on_lattice());
        const Values heat = random_heat(places.size(), random);
        const Values slow = slow_rise(places, thin, 0, heat);
        CHECK(farthest_apart(coupling.rise_of(heat), slow) <= 1e-9 * greatest(slow));
    }
}

TEST_CASE("single emitters and pairs have a coupling") {
    CHECK(HeatCoupling({Vec2(1e-3, 2e-3)}, chip100, 10).rise_of(Values{0.5}) == Values{5});
    const Values pair = HeatCoupling({{0, 0}, {30e-6, 40e-6}}, chip100, 10).rise_of(Values{1, 0});
    CHECK(pair[0] == about(10).epsilon(1e-12));
    CHECK(pair[1] == about(10 + coupling(50e-6, chip100)).epsilon(1e-12));
    CHECK_THROWS_AS(HeatCoupling({{0, 0}, {1, 1}, {0, 0}}, chip100), Error);
}

TEST_CASE("coupling is symmetric, positive, additive and monotone in heat") {
    RandomStream random(9);
    for (const std::vector<Vec2>& places :
         {grid(9, 11, 40e-6), hexagonal(10, 7, 40e-6), scattered(90, 4e-4, random)}) {
        const HeatCoupling coupling(places, chip100, 3);
        const std::size_t n = places.size();
        for (int trial = 0; trial < 20; ++trial) {
            const Values a = random_heat(n, random), b = random_heat(n, random);
            const Values rise_a = coupling.rise_of(a), rise_b = coupling.rise_of(b);
            // What b gets from a, weighted, is what a gets from b: q_b . G q_a = q_a . G q_b.
            double ab = 0, ba = 0;
            Values both(n);
            for (std::size_t i = 0; i < n; ++i)
                ab += b[i] * rise_a[i], ba += a[i] * rise_b[i], both[i] = a[i] + b[i];
            CHECK(ab == about(ba).epsilon(1e-12));
            const Values rise = coupling.rise_of(both);
            for (std::size_t i = 0; i < n; ++i) {
                CHECK(rise_a[i] > 0);
                CHECK(rise[i] > rise_a[i]);
                CHECK(rise[i] == about(rise_a[i] + rise_b[i]).epsilon(1e-12));
            }
        }
    }
}

TEST_CASE("any number of threads gives the same rises and temperatures") {
    RandomStream random(6);
    const int before = omp_get_max_threads();
    // The large grid is one whose transforms are shared out.
    for (const std::vector<Vec2>& places :
         {grid(40, 30, 40e-6), grid(380, 370, 40e-6), scattered(800, 1e-3, random)}) {
        const Values heat = random_heat(places.size(), random);
        const auto run = [&](int threads) {
            omp_set_num_threads(threads);
            const HeatCoupling coupling(places, chip100, 0.1);
            Values values = coupling.rise_of(heat);
            const ChipTemperatures chip =
                solve_chip(coupling, [&](std::size_t i, double T) { return diode_heat(heat[i], T); },
                           {.self_resistance = 1961, .most_iterations = 4});
            values.insert(values.end(), chip.temperature.begin(), chip.temperature.end());
            return values;
        };
        const Values one = run(1), two = run(2), five = run(5);
        CHECK(one == two);
        CHECK(one == five);
    }
    omp_set_num_threads(before);
}

TEST_CASE("a chip of 16,384 emitters sums as few of them do by hand") {
    const std::vector<Vec2> places = grid(128, 128, 30e-6);
    RandomStream random(12);
    const Values heat = random_heat(places.size(), random);
    const HeatCoupling fast(places, chip100);
    REQUIRE(fast.on_lattice());
    const Values rise = fast.rise_of(heat);
    for (const std::size_t i : {0, 127, 64 * 128 + 64, 100 * 128 + 3, 128 * 128 - 1}) {
        double sum = 0;
        for (std::size_t j = 0; j < places.size(); ++j)
            if (j != i) sum += heat[j] * coupling((places[i] - places[j]).norm(), chip100);
        CHECK(rise[i] == about(sum).epsilon(1e-9));
    }
}

TEST_CASE("the temperatures of a chip are those of a plain iteration") {
    RandomStream random(21);
    int most = 0;
    for (int trial = 0; trial < 200; ++trial) {
        const int rows = 1 + static_cast<int>(random.below(8)),
                  columns = 1 + static_cast<int>(random.below(8));
        const std::vector<Vec2> places = trial % 3 == 0   ? grid(rows, columns, 40e-6)
                                         : trial % 3 == 1 ? hexagonal(rows, columns, 40e-6)
                                                          : scattered(rows * columns, 4e-4, random);
        const double package = 10 * random.uniform();
        Values current(places.size());
        for (double& i : current) i = random.uniform() < 0.2 ? 0 : 12e-3 * random.uniform();
        const ChipConditions conditions{.sink_temperature = 270 + 80 * random.uniform(),
                                        .self_resistance = 1961};
        const auto heat_at = [&](std::size_t i, double T) { return diode_heat(current[i], T); };
        const ChipTemperatures chip = solve_chip(HeatCoupling(places, chip100, package), heat_at, conditions);
        CAPTURE(trial);
        REQUIRE(chip.settled);
        most = std::max(most, chip.iterations);

        const Matrix pairs = every_pair(places, chip100, package);
        Values slow(places.size(), conditions.sink_temperature), heat(places.size());
        for (int round = 0; round < 300; ++round) {
            for (std::size_t i = 0; i < slow.size(); ++i) heat[i] = heat_at(i, slow[i]);
            const Values rise = product(pairs, heat);
            for (std::size_t i = 0; i < slow.size(); ++i)
                slow[i] = conditions.sink_temperature + 1961 * heat[i] + rise[i];
        }
        // The tolerance is 1e-6 of the rise; it is an estimate, hence 3 times that.
        CHECK(farthest_apart(chip.temperature, slow) <=
              3e-6 * (greatest(slow) - conditions.sink_temperature) + 1e-9);
    }
    CHECK(most < 40);
}

TEST_CASE("a 16 x 16 chip driven to 8 mA is as warm as derived") {
    // All on, 100 um, self 1961 K/W: centre 326.1, corner 319.2, alone 315.6 K, were all neighbours as hot as
    // the emitter itself (derived). They differ by 0.7 mW in 10, and the sum over neighbours follows.
    const ChipConditions conditions{.self_resistance = 1961};
    const auto heat_at = [](std::size_t, double T) { return diode_heat(8e-3, T); };
    const ChipTemperatures chip = solve_chip(HeatCoupling(grid(16, 16, 40e-6), chip100), heat_at, conditions);
    CHECK(chip.settled);
    CHECK(std::abs(chip.temperature[7 * 16 + 7] - 326.1) < 0.2);
    CHECK(std::abs(chip.temperature[0] - 319.2) < 0.2);
    const ChipTemperatures alone = solve_chip(HeatCoupling({{0, 0}}, chip100), heat_at, conditions);
    CHECK(std::abs(alone.temperature[0] - 315.630) < 0.001);
    CHECK(std::abs(alone.heat[0] - 8.914e-3) < 1e-6);
}

TEST_CASE("of several balances the coldest is found, and none is called runaway") {
    // Heat a + b (T - 300)^2: with R the balance is x = R (a + b x^2), x = (1 -+ sqrt(1 - 4 R^2 a b))/(2 R
    // b).
    const HeatCoupling one({{0, 0}}, chip100);
    const auto solve = [&](double a, double b) {
        return solve_chip(one, [=](std::size_t, double T) { return a + b * (T - 300) * (T - 300); },
                          {.sink_temperature = 300, .self_resistance = 1000});
    };
    for (const double fold : {0.1, 0.5, 0.9, 0.99, 0.999}) {  // 4 R^2 a b; at 1 both balances meet
        CAPTURE(fold);
        const double b = 5e-6, a = fold / (4 * 1e6 * b);
        const ChipTemperatures chip = solve(a, b);
        CHECK(chip.settled);
        const double low = (1 - std::sqrt(1 - fold)) / (2 * 1000 * b);
        // The error estimate holds for a constant slope; near the fold the slope still grows.
        CHECK(chip.temperature[0] - 300 == about(low).epsilon(3e-6));
        CHECK(chip.iterations < 500);
    }
    const ChipTemperatures hot = solve(1.1 / (4 * 1e6 * 5e-6), 5e-6);
    CHECK_FALSE(hot.settled);
    // Heat that flips has no balance at all: the iterations end.
    const ChipTemperatures flips =
        solve_chip(one, [](std::size_t, double T) { return T < 350 ? 0.1 : 0.0; },
                   {.sink_temperature = 300, .self_resistance = 1000, .most_iterations = 50});
    CHECK_FALSE(flips.settled);
    CHECK(flips.iterations == 50);
}

TEST_CASE("heat that rises in a step leaves a chip on the cold side of it") {
    RandomStream random(30);
    const HeatCoupling coupling(grid(6, 6, 40e-6), chip100);
    const Matrix pairs = every_pair(grid(6, 6, 40e-6), chip100, 0);
    int cold = 0;
    for (int trial = 0; trial < 100; ++trial) {
        // Cold balance near 2500 K/W times 15 to 30 mW, a hot one 250 K higher, the step between.
        const double low = 15e-3 * (1 + random.uniform()), middle = 370 + 20 * random.uniform();
        const auto heat_at = [&](std::size_t i, double T) {
            return (i % 5 == 0 ? 0 : low) + 0.1 / (1 + std::exp((middle - T) / 6));
        };
        const ChipTemperatures chip = solve_chip(coupling, heat_at, {.self_resistance = 1961});
        Values slow(36, 298.15), heat(36);
        for (int round = 0; round < 2000; ++round) {
            for (std::size_t i = 0; i < 36; ++i) heat[i] = heat_at(i, slow[i]);
            const Values rise = product(pairs, heat);
            for (std::size_t i = 0; i < 36; ++i) slow[i] = 298.15 + 1961 * heat[i] + rise[i];
        }
        CHECK(chip.settled);
        CHECK(farthest_apart(chip.temperature, slow) < 1e-5 * (greatest(slow) - 298.15));
        if (greatest(slow) < middle) ++cold;
    }
    CHECK(cold > 20);  // and some where the hot balance is the only one
    CHECK(cold < 80);
}

TEST_CASE("a chip runs away as a whole where none of its emitters would alone") {
    const auto heat_at = [](std::size_t, double T) { return 5e-3 * std::exp((T - 298.15) / 60); };
    const ChipConditions conditions{.self_resistance = 1961};
    CHECK(solve_chip(HeatCoupling({{0, 0}}, bulk), heat_at, conditions).settled);
    CHECK_FALSE(solve_chip(HeatCoupling(grid(16, 16, 40e-6), bulk), heat_at, conditions).settled);
}

TEST_CASE("a chip that is off stays at the sink, and steady heat needs two rounds") {
    const HeatCoupling coupling(grid(4, 4, 40e-6), chip100, 10);
    const ChipTemperatures off =
        solve_chip(coupling, [](std::size_t, double) { return 0.0; }, {.sink_temperature = 310});
    CHECK(off.settled);
    CHECK(off.temperature == Values(16, 310.0));
    const ChipTemperatures steady =
        solve_chip(coupling, [](std::size_t, double) { return 1e-3; }, {.self_resistance = 2000});
    CHECK(steady.settled);
    CHECK(steady.iterations == 2);
    CHECK(steady.temperature[5] == about(298.15 + 2 + coupling.rise_of(Values(16, 1e-3))[5]).epsilon(1e-12));
}

TEST_CASE("the endless array's short cut holds where its documentation says") {
    const auto summed = [](double d, double p, double h) {
        // Isothermal disc, its own images, and neighbours as far as 15 thicknesses.
        const Substrate slab{.thickness = h};
        double sum = disc_resistance(d, 46) - std::numbers::ln2 / (2 * pi * 46 * h);
        const int reach = static_cast<int>(15 * h / p) + 1;
        for (int y = -reach; y <= reach; ++y)
            for (int x = -reach; x <= reach; ++x)
                if (x != 0 || y != 0) sum += coupling(p * std::hypot(x, y), slab);
        return sum;
    };
    const auto excess = [&](double d, double p, double h) {
        return endless_array_resistance(d, p, {.thickness = h}) / summed(d, p, h) - 1;
    };
    // 40 um pitch, 100 um: 2105.2 K/W against 2108.3 summed for 10 um; 2372.7 against 2380.0 for 8 um
    // (derived).
    CHECK(endless_array_resistance(10e-6, 40e-6, chip100) == about(2105.2).epsilon(3e-5));
    CHECK(endless_array_resistance(8e-6, 40e-6, chip100) == about(2372.7).epsilon(3e-5));
    // The derived sums took 41 x 41 emitters, 8 thicknesses: 4e-5 of the sum lies beyond.
    CHECK(summed(10e-6, 40e-6, 100e-6) == about(2108.3).epsilon(1e-4));
    CHECK(summed(8e-6, 40e-6, 100e-6) == about(2380.0).epsilon(1e-4));
    for (const double h : {0.5, 0.7, 1.0, 2.0, 5.0})
        for (double d = 0.02; d <= 1.0 / 3; d += 0.0313) {
            CAPTURE(h);
            CAPTURE(d);
            CHECK(std::abs(excess(d * 40e-6, 40e-6, h * 40e-6)) < 0.01);
        }
    CHECK(excess(20e-6, 40e-6, 40e-6) == about(0.026).epsilon(0.03));
    CHECK(excess(20e-6, 40e-6, 20e-6) == about(0.044).epsilon(0.03));
    CHECK(excess(12e-6, 40e-6, 10e-6) == about(0.055).epsilon(0.03));
}
