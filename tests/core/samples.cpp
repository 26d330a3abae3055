// Samples: even, seeded, and measure preserving.
#include "about.h"

#include <glint/core/parallel.h>
#include <glint/core/samples.h>

#include <doctest/doctest.h>
#include <cmath>
#include <numeric>
#include <stdexcept>

using namespace glint;

TEST_CASE("the R2 sequence fills the square more evenly than random points") {
    // Share of 4096 points below and left of a corner against its area: a random sequence errs by about
    // 0.008.
    const int n = 4096;
    double worst = 0;
    for (const double a : {0.1, 0.37, 0.5, 0.83})
        for (const double b : {0.2, 0.5, 0.71}) {
            int inside = 0;
            for (int i = 0; i < n; ++i) {
                const Vec2 p = r2_point(static_cast<std::uint32_t>(i), Vec2(0.3, 0.6));
                inside += p.x() < a && p.y() < b;
            }
            worst = std::max(worst, std::abs(static_cast<double>(inside) / n - a * b));
        }
    CHECK(worst < 0.002);
}

TEST_CASE("square to disc keeps areas") {
    const int n = 40000;
    int within = 0;
    for (int i = 0; i < n; ++i)
        within += square_to_disc(r2_point(static_cast<std::uint32_t>(i), Vec2::Zero())).norm() < 0.5;
    CHECK(static_cast<double>(within) / n == about(0.25).epsilon(0.01));  // low-discrepancy error ~ 1/sqrt(n)
}

TEST_CASE("square to Gaussian puts 86.47 % within the 1/e2 radius") {
    const int n = 40000;
    int within = 0;
    for (int i = 0; i < n; ++i)
        within += square_to_gaussian(r2_point(static_cast<std::uint32_t>(i), Vec2::Zero())).norm() < 1;
    CHECK(static_cast<double>(within) / n == about(1 - std::exp(-2.0)).epsilon(0.005));
}

TEST_CASE("a seeded stream repeats and differs by seed") {
    RandomStream a(5), b(5), c(6);
    const auto first = a.bits();
    CHECK(first == b.bits());
    CHECK(first != c.bits());
    for (int i = 0; i < 1000; ++i) CHECK(a.below(7) < 7);
}

TEST_CASE("a parallel loop visits every index once and passes on the first error by index") {
    std::vector<int> visits(10007, 0);
    parallel_for(visits.size(), [&](std::size_t i) { ++visits[i]; });
    CHECK(std::accumulate(visits.begin(), visits.end(), 0) == 10007);
    CHECK(*std::min_element(visits.begin(), visits.end()) == 1);
    CHECK_THROWS_AS(parallel_for(100,
                                 [](std::size_t i) {
                                     if (i == 42) throw std::runtime_error("42");
                                 }),
                    std::runtime_error);
}

TEST_CASE("a parallel loop ends when asked to stop") {
    const std::atomic<bool> stop = true;
    int visits = 0;
    CHECK_THROWS_AS(
        parallel_for(1000, "work", Progress{.report = {}, .stop = &stop}, [&](std::size_t) { ++visits; }),
        Stopped);
    CHECK(visits == 0);
}
