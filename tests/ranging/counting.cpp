// Poisson statistics, detection and the precision bound.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/ranging/photon_counting.h>
#include <glint/ranging/poisson.h>

#include <doctest/doctest.h>
#include <cmath>
#include <initializer_list>

using namespace glint;

namespace {

// Independent slow tail: one minus the sum of the terms.
double slow_tail(int k, double mean) {
    double below = 0;
    for (int i = 0; i < k; ++i) below += std::exp(i * std::log(mean) - mean - std::lgamma(i + 1.0));
    return 1 - below;
}

// K(rho) by Simpson's rule over +-12 sigma, from its definition.
double slow_information(double rho) {
    const int n = 6000;
    const double l = 12, h = 2 * l / n, p0 = 1 / std::sqrt(2 * pi);
    double sum = 0;
    for (int i = 0; i <= n; ++i) {
        const double x = -l + i * h, f = p0 * std::exp(-x * x / 2);
        sum += (i == 0 || i == n ? 1 : i % 2 == 1 ? 4 : 2) * x * x * f * f / (f + rho * p0);
    }
    return sum * h / 3;
}

Design counting_design(double pulse, double jitter, double bin, double gate) {
    Design design;
    design.emitters.wavelength = 940e-9;
    design.drive.pulse_width = pulse;
    design.firing.shots = 1000;
    design.receiver.photon_counting = {.efficiency = 0.2,
                                       .dark_count_rate = 1e3,
                                       .jitter = jitter,
                                       .bin = bin,
                                       .gate = gate,
                                       .false_alarm = 0.01};
    return design;
}

}  // namespace

TEST_CASE("Poisson tails equal the sum of terms") {
    RandomStream random(3);
    for (int i = 0; i < 2000; ++i) {
        const double mean = std::pow(10.0, -2 + 4 * random.uniform());
        const int k = 1 + static_cast<int>(random.below(static_cast<std::uint64_t>(3 * mean + 10)));
        CHECK(std::abs(poisson_tail(k, mean) - slow_tail(k, mean)) < 1e-10);  // cancellation in the slow sum
    }
    CHECK(poisson_tail(0, 5) == 1);
    CHECK(poisson_tail(3, 0) == 0);
}

TEST_CASE("thresholds and required signals for 1000 bins and 1 % false alarms") {
    // Derived table, exact Poisson: p = 1.005e-5; mean background, k*, signal for 90 % and for 99 %.
    const double p = -std::expm1(std::log1p(-0.01) / 1000);
    CHECK(p == about(1.005e-5).epsilon(1e-3));
    const double table[][4] = {
        {0.1, 4, 6.58, 9.95},     {1, 9, 11.99, 16.40},       {5, 18, 18.61, 24.31},
        {10, 27, 23.84, 30.53},   {20, 43, 31.59, 39.71},     {50, 84, 45.94, 56.78},
        {100, 146, 61.68, 75.57}, {300, 378, 103.12, 124.69}, {1000, 1139, 182.46, 218.98}};
    for (const auto& [mean, k, ninety, ninety_nine] : table) {
        CHECK(poisson_threshold(mean, p) == static_cast<int>(k));
        CHECK(required_signal(static_cast<int>(k), mean, 0.90) == about(ninety).epsilon(1e-3));
        CHECK(required_signal(static_cast<int>(k), mean, 0.99) == about(ninety_nine).epsilon(1e-3));
    }
}

TEST_CASE("a threshold is the least that keeps the false alarms") {
    RandomStream random(8);
    for (int i = 0; i < 2000; ++i) {
        const double mean = std::pow(10.0, -4 + 7 * random.uniform()),
                     p = std::pow(10.0, -9 + 8 * random.uniform());
        const int k = poisson_threshold(mean, p);
        CHECK(poisson_tail(k, mean) <= p);
        CHECK((k == 1 || poisson_tail(k - 1, mean) > p));
    }
}

TEST_CASE("growth of the variance by background, against its integral") {
    // Derived table of K(rho), and the closed form that is used, within 1.3 % in variance (0.63 % in
    // deviation).
    const double table[][2] = {{0.001, .98598}, {0.003, .96721}, {0.01, .92111}, {0.03, .83586},
                               {0.1, .671432},  {0.3, .46168},   {1, .234853},   {3, .10022},
                               {10, .033548},   {30, .011576},   {100, .003516}};
    for (const auto& [rho, k] : table) {
        CHECK(slow_information(rho) == about(k).epsilon(2e-4));
        CHECK(std::sqrt(variance_growth(rho)) == about(1 / std::sqrt(k)).epsilon(0.0064));
    }
}

TEST_CASE("timing response") {
    // Incoronato et al. (2021) form; 1 ns pulse, 150 ps jitter, 250 ps bin: 435.43 ps. A 60 m gate holds 1601
    // bins.
    const CountingModel model = counting_model(counting_design(1e-9, 150e-12, 250e-12, 60));
    CHECK(model.timing == about(435.43e-12).epsilon(1e-4));
    CHECK(std::abs(model.bins - 1601) <= 1);  // the published count is for vacuum
    CHECK(model.captured == about(0.8385).epsilon(1e-3));
    // 1 cm single shot needs 66.7 ps (the paper: below 70 ps): range = c t / 2.
    CHECK(0.01 / model.range_per_time == about(66.71e-12).epsilon(5e-4));
}

TEST_CASE("precision without background is the photon noise of the pulse") {
    // Derived: 100 photons, 1 ns FWHM, no background: 6.3655 mm in vacuum.
    CountingModel model = counting_model(counting_design(1e-9, 0, 1e-12, 60));
    CHECK(precision_bound(model, 100, 0) == about(6.3655e-3).epsilon(4e-4));
    CHECK(std::isinf(precision_bound(model, 0, 1)));
}

TEST_CASE("a worked photon-counting budget, without blocking") {
    // Derived budget: lambda 940, sun 0.30343 W/m2/nm over 20 nm, rho 0.10, eta 0.7, PDE 0.20, p 10 um,
    // N 1.2, f 5 mm, 1 nJ on the patch, transmit 0.9: b = 6.981e6 /s, n_s(10/20/30/50 m)
    // = 2.5879/.64696/.28754/.10351.
    const CountingModel model = counting_model(counting_design(1e-9, 150e-12, 250e-12, 60));
    const double pupil = pi / 4 * std::pow(5e-3 / 1.2, 2), solid_angle = std::pow(2e-3, 2);
    const double sun = 0.30343 * 20 * 0.10 / pi * pupil * solid_angle * 0.7;
    CHECK(background_rate(model, sun) == about(6.981e6).epsilon(1e-3));
    const double ranges[][2] = {{10, 2.5879}, {20, .64696}, {30, .28754}, {50, .10351}};
    for (const auto& [range, expected] : ranges)
        CHECK(0.9e-9 * 0.10 / pi * pupil / (range * range) * 0.7 * model.counts_per_joule ==
              about(expected).epsilon(1e-3));
    // With dead time 0 nothing blocks: 1000 shots, mu = b N w = 8.51, and 22.95 counts in the window give 90
    // %.
    CHECK(window_background(model, 6.981e6) == about(8.51).epsilon(1e-3));
    const int k = poisson_threshold(window_background(model, 6.981e6), model.false_alarm);
    CHECK(required_signal(k, window_background(model, 6.981e6), 0.9) ==
          about(22.95).epsilon(0.02));  // published by closed form
}

TEST_CASE("dead time: counts saturate and the detector is armed for part of the time") {
    // Textbook non-paralysable: 1e6 / 1e7 / 1e8 / 1e9 per second with 10 ns count 9.901e5 / 9.091e6 / 5.000e7
    // / 9.091e7.
    Design design = counting_design(1e-9, 150e-12, 250e-12, 60);
    design.receiver.photon_counting.dead_time = 10e-9;
    const CountingModel model = counting_model(design);
    const double counted[][2] = {{1e6, 9.901e5}, {1e7, 9.091e6}, {1e8, 5.000e7}, {1e9, 9.091e7}};
    for (const auto& [rate, expected] : counted)
        CHECK(window_background(model, rate) / (model.window * model.shots) == about(expected).epsilon(1e-3));
    CHECK(echo_counts(model, 1e6, 0) == about(1000));  // one count a shot at most
    CHECK(echo_counts(model, 0.01, 0) == about(1000 * -std::expm1(-0.01)));
    CHECK(echo_counts(model, 0.01, 1e8) < echo_counts(model, 0.01, 0));
}

TEST_CASE("detection rises with signal and falls with background") {
    const CountingModel model = counting_model(counting_design(1e-9, 150e-12, 250e-12, 60));
    RandomStream random(5);
    for (int i = 0; i < 500; ++i) {
        const double signal = std::pow(10.0, -4 + 4 * random.uniform()),
                     rate = std::pow(10.0, 3 + 5 * random.uniform());
        const Detection one = detect(model, signal, rate), more = detect(model, signal * 1.3, rate),
                        noisier = detect(model, signal, rate * 1.3);
        CHECK(more.probability >= one.probability);
        CHECK(more.precision <= one.precision);
        CHECK(noisier.precision >= one.precision);
        CHECK(noisier.threshold >= one.threshold);
        CHECK((one.probability >= 0 && one.probability <= 1));
    }
}
