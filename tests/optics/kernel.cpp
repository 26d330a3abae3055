// Angular kernels against textbook optics, and their power.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/optics/kernel.h>

#include <doctest/doctest.h>
#include <cmath>

using namespace glint;

namespace {

// Independent slow integral of the intensity over solid angle: midpoint rule in spherical angles about the
// axis.
double total_power(const Kernel& kernel, int steps = 1500) {
    const double end = std::min(std::atan(kernel.reach), pi / 2);
    double sum = 0;
    for (int i = 0; i < steps; ++i) {
        const double theta = end * (i + 0.5) / steps, t = std::tan(theta);
        double ring = 0;
        const int spokes = 720;
        for (int k = 0; k < spokes; ++k) {
            const double phi = 2 * pi * (k + 0.5) / spokes;
            ring += intensity(kernel, t * std::cos(phi), t * std::sin(phi));
        }
        sum += ring / spokes * 2 * pi * std::sin(theta) * end / steps;
    }
    return sum;
}

}  // namespace

TEST_CASE("every kernel integrates to 1 over solid angle") {
    // 0.1 %: the sum above has edges on no raster line.
    CHECK(total_power(gaussian_kernel(std::tan(radians(10)), std::tan(radians(10)))) ==
          about(1).epsilon(1e-4));
    CHECK(total_power(gaussian_kernel(0.3, 0.1)) == about(1).epsilon(1e-4));
    CHECK(total_power(ring_kernel(0.2, 0.05)) == about(1).epsilon(1e-4));
    CHECK(total_power(ring_kernel(0.02, 0.05)) == about(1).epsilon(1e-4));
    for (const double n : {0.0, 3.0, 4.0, 7.0}) {
        CHECK(total_power(rectangle_kernel(std::tan(radians(30)), std::tan(radians(22.5)), 0, n)) ==
              about(1).epsilon(1e-3));
        CHECK(total_power(rectangle_kernel(std::tan(radians(30)), std::tan(radians(22.5)), 0.05, n)) ==
              about(1).epsilon(1e-3));
        CHECK(total_power(round_kernel(std::tan(radians(30)), 0.04, n)) == about(1).epsilon(1e-3));
    }
}

TEST_CASE("Gaussian widths, textbook") {
    // Textbook Gaussian beam: full 1/e2 width = 1.698644 FWHM; 86.4665 % inside 1/e2, 50 % inside FWHM.
    const Kernel by_full = lobe_kernel({.width = BeamWidth::full_1e2, .divergence = radians(20)});
    const Kernel by_half = lobe_kernel({.width = BeamWidth::half_1e2, .divergence = radians(10)});
    CHECK(by_full.a == about(std::tan(radians(10))));
    CHECK(by_half.a == about(by_full.a));
    CHECK(power_within(by_full, by_full.a) == about(0.864665).epsilon(1e-6));
    const Kernel by_fwhm = lobe_kernel({.width = BeamWidth::fwhm, .divergence = radians(0.2)});
    CHECK(by_fwhm.a / std::tan(radians(0.1)) == about(1.698644).epsilon(1e-6));
    CHECK(power_within(by_fwhm, std::tan(radians(0.1))) == about(0.5).epsilon(1e-9));
    // At the half angle the intensity on a flat screen is half, and 1/e2, of the peak.
    const auto on_screen = [](const Kernel& kernel, double t) {
        return intensity(kernel, t, 0) / std::pow(1 + t * t, 1.5);
    };
    CHECK(on_screen(by_fwhm, std::tan(radians(0.1))) / on_screen(by_fwhm, 0) == about(0.5));
    CHECK(on_screen(by_full, std::tan(radians(10))) / on_screen(by_full, 0) == about(std::exp(-2.0)));
}

TEST_CASE("diffuser solid angles, derived from I = I0 cos^-n") {
    // P / I0 for a rectangle of 60 x 45 deg and a round field of 30 deg half angle; own derivation,
    // recomputed.
    const double a = std::tan(radians(30)), b = std::tan(radians(22.5));
    const double rectangle[][2] = {{0, 0.77012}, {3, 0.95659}, {4, 1.03279}, {7, 1.31762}};
    for (const auto& [n, solid_angle] : rectangle)
        CHECK(1 / rectangle_kernel(a, b, 0, n).scale == about(solid_angle).epsilon(1e-5));
    const double round[][2] = {{0, 0.84179}, {3, 1.04720}, {4, 1.13014}, {7, 1.43505}};
    for (const auto& [n, solid_angle] : round)
        CHECK(1 / round_kernel(a, 0, n).scale == about(solid_angle).epsilon(1e-5));
    // Closed forms: n = 0 is the solid angle 4 asin(sin(a/2) sin(b/2)); n = 3 is the area in the tangent
    // plane.
    CHECK(1 / rectangle_kernel(a, b, 0, 0).scale ==
          about(4 * std::asin(std::sin(radians(30)) * std::sin(radians(22.5)))).epsilon(1e-6));
    CHECK(1 / rectangle_kernel(a, b, 0, 3).scale == about(4 * a * b).epsilon(1e-6));
    // 1 W, n = 3: 1.04539 W/sr on axis. Edge over centre for a round field: cos^-n 30 deg.
    CHECK(rectangle_kernel(a, b, 0, 3).scale == about(1.04539).epsilon(1e-5));
    const double edge_over_centre[][2] = {{3, 1.5396}, {4, 1.7778}, {7, 2.7371}};
    for (const auto& [n, ratio] : edge_over_centre) {
        const Kernel kernel = round_kernel(a, 0, n);
        CHECK(intensity(kernel, a * (1 - 1e-9), 0) / intensity(kernel, 0, 0) == about(ratio).epsilon(1e-4));
    }
}

TEST_CASE("a Gaussian source softens the edge to 1.088 of its full width at half maximum") {
    // Derived: 10-90 % of a step convolved with a Gaussian is 2.5631 sigma, its FWHM 2.3548 sigma.
    const double w = 0.02;  // 1/e2 half width: two sigma
    const Kernel kernel = rectangle_kernel(0.5, 0.4, w, 3);
    const auto crossing =
        [&](double level) {  // n = 3 is flat on a screen, so the level is that of the edge alone
            double low = 0.4, high = 0.6;
            const auto screen = [&](double p) { return intensity(kernel, p, 0) / std::pow(1 + p * p, 1.5); };
            for (int i = 0; i < 60; ++i)
                (screen((low + high) / 2) > level * screen(0) ? low : high) = (low + high) / 2;
            return low;
        };
    CHECK((crossing(0.1) - crossing(0.9)) / (2.3548 * w / 2) == about(1.0884).epsilon(2e-3));
}

TEST_CASE("capture by a lens, Gaussian: closed form on axis, Marcum series off axis") {
    // Textbook: 1 - exp(-2 (tan L / tan e)^2): 10 deg in NA 0.2 (11.54 deg) 0.9315, NA 0.25 0.9863; 12 deg in
    // NA 0.3 0.9875.
    const auto on_axis = [](double divergence, double na) {
        const double t = std::tan(radians(divergence));
        return captured_share(gaussian_kernel(t, t), 1, 0, std::tan(std::asin(na)));
    };
    CHECK(on_axis(10, 0.2) == about(0.9315).epsilon(1e-4));
    CHECK(on_axis(10, 0.25) == about(0.9863).epsilon(1e-4));
    CHECK(on_axis(12, 0.3) == about(0.9875).epsilon(1e-4));
    // f = 2.5 mm, R = 1 mm, 10 deg: derived by the series 1 - Q1 and a direct integral, equal to 5 digits.
    const double t = std::tan(radians(10));
    const double expected[][2] = {{0, 0.99997}, {0.3e-3, 0.99857}, {0.6e-3, 0.95276}, {0.9e-3, 0.63176}};
    for (const auto& [x, share] : expected)
        CHECK(captured_share(gaussian_kernel(t, t), 2.5e-3, x, 1e-3) == about(share).epsilon(1.2e-5));
}

TEST_CASE("capture equals a slow count over random beams, rings too") {
    RandomStream random(9);
    for (int trial = 0; trial < 12; ++trial) {
        const bool ring = trial % 2 == 1;
        const double wall = 0.02 + 0.1 * random.uniform();
        const Kernel kernel = ring ? ring_kernel(0.3 * random.uniform(), wall) : gaussian_kernel(wall, wall);
        const double offset = 0.3 * random.uniform(), radius = 0.05 + 0.3 * random.uniform();
        int inside = 0;
        const int n = 40000;
        for (int i = 0; i < n; ++i) {
            const Vec2 at = sample(kernel, r2_point(static_cast<std::uint32_t>(i), Vec2(0.5, 0.5))).tangent;
            inside += (at + Vec2(offset, 0)).norm() < radius;
        }
        // Counting error of a low-discrepancy set across a rim: below 1 / sqrt(n) / 5.
        CHECK(std::abs(captured_share(kernel, 1, offset, radius) - static_cast<double>(inside) / n) < 1e-3);
    }
}

TEST_CASE("samples carry the power of the kernel where they fall") {
    const Kernel kernels[] = {gaussian_kernel(0.2, 0.1), ring_kernel(0.2, 0.05),
                              rectangle_kernel(0.5, 0.3, 0.05, 4), round_kernel(0.4, 0.05, 3)};
    for (const Kernel& kernel : kernels) {
        double all = 0, right = 0, mean_square = 0;
        const int n = 60000;
        for (int i = 0; i < n; ++i) {
            const KernelSample at = sample(kernel, r2_point(static_cast<std::uint32_t>(i), Vec2(0.1, 0.7)));
            all += at.weight / n;
            right += (at.tangent.x() > 0) * at.weight / n;
            mean_square += at.weight / n * at.tangent.x() * at.tangent.x();
        }
        CHECK(all == about(1).epsilon(0.003));
        CHECK(right == about(0.5).epsilon(0.005));
        if (kernel.shape == KernelShape::gaussian) CHECK(mean_square == about(0.2 * 0.2 / 4).epsilon(0.005));
        if (kernel.shape == KernelShape::ring)
            CHECK(2 * std::sqrt(mean_square) == about(equivalent_half_width(kernel)).epsilon(0.005));
    }
}
