// Receiver optics and the module's pose.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/optics/pose.h>
#include <glint/optics/receiver.h>

#include <doctest/doctest.h>
#include <cmath>

using namespace glint;

namespace {

Receiver receiver_of(LensMapping mapping) {
    Receiver receiver;
    receiver.lens = {.focal_length = 3e-3, .f_number = 1.4, .mapping = mapping};
    receiver.pixels = {.columns = 200, .rows = 160, .pitch = 20e-6};
    return receiver;
}

}  // namespace

TEST_CASE("light falls off as cos^4 behind a tangent lens, and more slowly behind an f-theta lens") {
    // Textbook (cosine fourth law): cos^4 30 deg = 0.5625. f-theta: cos sin(theta)/theta, 0.8270 at 30 deg.
    const double tangent[][2] = {{10, 0.9406}, {20, 0.7797}, {30, 0.5625}};
    const double f_theta[][2] = {{10, 0.9798}, {20, 0.9207}, {30, 0.8270}};
    const auto falloff = [](LensMapping mapping, double angle) {
        Receiver receiver = receiver_of(mapping);
        const double x = mapping == LensMapping::tangent ? std::tan(angle) : angle;
        const double column = 100 + x * 3e-3 / 20e-6;
        const PixelRay off = pixel_ray(receiver, 0, 0, {column, 80}),
                       axis = pixel_ray(receiver, 0, 0, {100, 80});
        return off.solid_angle * off.cosine / (axis.solid_angle * axis.cosine);
    };
    for (const auto& [angle, expected] : tangent)
        CHECK(falloff(LensMapping::tangent, radians(angle)) == about(expected).epsilon(1e-4));
    for (const auto& [angle, expected] : f_theta)
        CHECK(falloff(LensMapping::f_theta, radians(angle)) == about(expected).epsilon(1e-4));
}

TEST_CASE("pixel solid angles add up to the solid angle of the field") {
    for (const LensMapping mapping : {LensMapping::tangent, LensMapping::f_theta}) {
        const Receiver receiver = receiver_of(mapping);
        double sum = 0;
        for (int row = 0; row < receiver.pixels.rows; ++row)
            for (int column = 0; column < receiver.pixels.columns; ++column)
                sum += pixel_ray(receiver, column, row, {0.5, 0.5}).solid_angle;
        const Vec2 view = field_of_view(receiver);
        if (mapping == LensMapping::tangent)
            CHECK(sum == about(4 * std::asin(std::sin(view.x() / 2) * std::sin(view.y() / 2))).epsilon(1e-4));
        else
            CHECK(sum < view.x() * view.y());
    }
}

TEST_CASE("pixel (0, 0) is the upper left of the field, rays are unit vectors") {
    for (const LensMapping mapping : {LensMapping::tangent, LensMapping::f_theta}) {
        const Receiver receiver = receiver_of(mapping);
        const Vec3 first = pixel_ray(receiver, 0, 0, {0.5, 0.5}).direction;
        CHECK(first.y() > 0);
        CHECK(first.z() > 0);
        CHECK(pixel_ray(receiver, 199, 159, {0.5, 0.5}).direction.y() < 0);
        CHECK(first.norm() == about(1).epsilon(1e-14));
    }
    CHECK(degrees(field_of_view(receiver_of(LensMapping::tangent)).x()) == about(67.3801).epsilon(1e-5));
}

TEST_CASE("the pose turns right, lifts, and tips clockwise") {
    const Pose right = module_pose({.x = 1, .y = 2, .z = 3, .heading = radians(90)});
    CHECK((right.to_scene(Vec3(1, 0, 0)) - Vec3(1, 1, 3)).norm() <
          1e-12);  // forward becomes -y, which is right
    const Pose up = module_pose({.elevation = radians(30)});
    CHECK(up.to_scene(Vec3(1, 0, 0)).z() == about(0.5));
    const Pose tipped = module_pose({.roll = radians(90)});
    CHECK((tipped.to_scene(Vec3(0, 1, 0)) - Vec3(0, 0, 1)).norm() < 1e-12);  // left goes up
    RandomStream random(1);
    for (int i = 0; i < 100; ++i) {
        const Pose pose = module_pose({.x = random.uniform(),
                                       .heading = random.uniform(),
                                       .elevation = random.uniform(),
                                       .roll = random.uniform()});
        const Vec3 p(random.uniform(), random.uniform(), random.uniform());
        CHECK((pose.to_module(pose.to_scene(p)) - p).norm() < 1e-14);
    }
}
