// Collection: the share of a beam through a pupil, held against closed forms and dense sums.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/safety/collection.h>

#include <doctest/doctest.h>
#include <cmath>

using namespace glint;

namespace {

Beam beam_of(const Kernel& kernel) { return {.kernel = kernel, .power = 1}; }

Aperture pupil_at(double distance, double aside, double radius = 3.5e-3) {
    const double x = std::sqrt(distance * distance - aside * aside);
    return {.centre = Vec3(x, 0, aside), .radius = radius};
}

// The intensity summed over a fine grid of the aperture.
double dense_share(const Beam& beam, const Aperture& aperture) {
    constexpr int n = 700;
    const Vec3 facing = aperture.centre.normalized(), across = facing.unitOrthogonal(),
               up = facing.cross(across);
    double sum = 0;
    int inside = 0;
    for (int i = 0; i < n; ++i)
        for (int k = 0; k < n; ++k) {
            const Vec2 at = Vec2(2 * i + 1 - n, 2 * k + 1 - n) / n;
            if (at.squaredNorm() > 1) continue;
            ++inside;
            const Vec3 ray =
                aperture.centre + aperture.radius * (at.x() * across + at.y() * up) - beam.origin;
            const double length = ray.norm();
            sum += intensity(beam, ray / length) * ray.dot(facing) / (length * length * length);
        }
    return sum / inside * pi * aperture.radius * aperture.radius / beam.power;
}

}  // namespace

TEST_CASE("the share of a ring on axis is the closed form") {
    for (const double wall : {0.003, 0.006, 0.02})
        for (const double crest : {0.0, 0.005, 0.02, 0.0345, 0.04})
            for (const double distance : {0.1, 0.2}) {
                CAPTURE(wall);
                CAPTURE(crest);
                CAPTURE(distance);
                const Kernel kernel = ring_kernel(crest, wall);
                // The tangent of the pupil's rim; 1e-4 of all power is the quadrature's.
                const double share = power_within(kernel, 3.5e-3 / distance);
                CHECK(std::abs(collected_share(beam_of(kernel), pupil_at(distance, 0)) - share) < 1e-4);
            }
}

TEST_CASE("the share of rings and of fields with edges is that of a dense sum") {
    RandomStream random(81);
    const auto between = [&](double low, double high) { return low + (high - low) * random.uniform(); };
    for (int i = 0; i < 60; ++i) {
        const double wall = between(0.003, 0.05), crest = between(0, 0.2);
        Kernel kernel = ring_kernel(crest, wall);
        if (i % 3 == 1) kernel = round_kernel(between(0.1, 0.5), between(0.005, 0.1), between(0, 4));
        if (i % 3 == 2)
            kernel =
                rectangle_kernel(between(0.1, 0.5), between(0.1, 0.5), between(0.005, 0.1), between(0, 4));
        Beam beam = beam_of(kernel);
        beam.origin = Vec3(0, between(-2e-3, 2e-3), between(-2e-3, 2e-3));
        const double distance = between(0.1, 0.3);
        const Aperture aperture = pupil_at(distance, distance * between(0, 0.4));
        const double dense = dense_share(beam, aperture);
        CAPTURE(i);
        CAPTURE(distance);
        // Of what an even field of the kernel's peak would send: shares near dark places are small. The grid
        // of the dense sum is good to 2e-4 at the rim.
        const double most = kernel.scale * pi * std::pow(aperture.radius / distance, 2);
        CHECK(std::abs(collected_share(beam, aperture) - dense) < 1e-3 * std::min(1.0, most));
    }
}

TEST_CASE("the share of a narrow beam is the Marcum function") {
    RandomStream random(82);
    for (int i = 0; i < 20'000; ++i) {
        // A point source whose lobe is w wide at the pupil, 0.05 to 100 times its radius.
        const double radius = 3.5e-3, distance = 1;
        const double width = radius * std::min(0.05 * std::pow(2000, random.uniform()), 12.0);
        const double aside = random.uniform() * (radius + 3 * width);
        Beam beam = beam_of(gaussian_kernel(width, width));
        beam.origin = Vec3(0, 0, aside);
        const double share = captured_share(beam.kernel, distance, aside, radius);
        const double on_axis = captured_share(beam.kernel, distance, 0, radius);
        CAPTURE(width);
        CAPTURE(aside);
        // 1e-4 of the table, 4e-4 of the quadrature of narrow beams, and the tail beyond 3 widths (1.5e-8).
        CHECK(std::abs(collected_share(beam, pupil_at(distance, 0)) - share) < 5e-4 * on_axis);
    }
}
