// Each shape against its closed form, and against laws every surface obeys.
#include "about.h"

#include "scene/support.h"

#include <glint/scene/intersect.h>

#include <doctest/doctest.h>

using namespace glint;
using namespace glint::testing;

namespace {

Ray from(const Vec3& origin, const Vec3& direction) {
    return {.origin = origin, .direction = direction.normalized()};
}

void check_vector(const Vec3& got, const Vec3& wanted, double tolerance) {
    CHECK_MESSAGE((got - wanted).norm() <= tolerance, got.transpose()
                                                          << " instead of " << wanted.transpose());
}

// A value below 0 inside, 0 on the surface, above 0 outside; within a few roundings a distance near it.
double outside(const Box& box, const Vec3& p) {
    return ((box.rotation.transpose() * (p - box.centre)).cwiseAbs() - box.half_size).maxCoeff();
}
double outside(const Sphere& sphere, const Vec3& p) { return (p - sphere.centre).norm() - sphere.radius; }
double outside(const Cylinder& cylinder, const Vec3& p) {
    const double along = (p - cylinder.base).dot(cylinder.axis);
    const double across = (p - cylinder.base - along * cylinder.axis).norm();
    return std::max({across - cylinder.radius, -along, along - cylinder.length});
}

// Random rays at one solid: the point is on the surface, the normal is the gradient and faces the origin, and
// the ray does not change sides before the hit, nor at all when there is none.
template <class Shape>
void check_laws(const Shape& shape, std::uint64_t seed) {
    RandomStream random(seed);
    int hits = 0, faults = 0;
    for (int i = 0; i < 20000; ++i) {
        const Ray ray = random_ray(random, 3);
        const double distance = distance_to(shape, ray);
        const double until = std::min(distance, 20.0);
        const bool starts_inside = outside(shape, ray.origin) < 0;
        for (int k = 1; k < 64; ++k) {
            const double value = outside(shape, ray.origin + until * (k / 64.0) * ray.direction);
            // 1e-12: above rounding at these sizes (about 10 m), for samples that graze the surface.
            if (std::abs(value) > 1e-12 && (value < 0) != starts_inside) ++faults;
        }
        if (distance == no_distance) continue;
        ++hits;
        const SurfacePoint at = surface_at(shape, ray, distance);
        if (std::abs(outside(shape, at.point)) > 1e-14) ++faults;
        // Touching rays magnify rounding to its square root.
        if ((at.point - (ray.origin + distance * ray.direction)).norm() > 1e-7) ++faults;
        if (std::abs(at.normal.norm() - 1) > 1e-14) ++faults;
        if (at.normal.dot(ray.direction) > 0) ++faults;
        const Vec3 side = random_direction(random);
        const double step = 1e-6;  // central difference: error step^2, rounding 1e-15 / step
        const double slope =
            (outside(shape, at.point + step * side) - outside(shape, at.point - step * side)) / (2 * step);
        const double sign = starts_inside ? -1 : 1;
        const bool at_rim = std::abs(outside(shape, at.point + step * at.normal) - sign * step) > 1e-9;
        if (!at_rim && std::abs(slope - sign * at.normal.dot(side)) > 1e-4) ++faults;
    }
    CHECK(faults == 0);
    CHECK(hits > 200);
}

}  // namespace

TEST_CASE("plane: distance is height over the cosine") {
    const Plane floor{.point = {5, 5, 0}, .normal = Vec3::UnitZ()};
    const Ray down = from({0, 0, 3}, {1, 0, -1});
    CHECK(distance_to(floor, down) == about(3 * std::sqrt(2.0)).epsilon(1e-15));
    const SurfacePoint at = surface_at(floor, down, distance_to(floor, down));
    check_vector(at.point, {3, 0, 0}, 1e-15);
    check_vector(at.normal, {0, 0, 1}, 0);
    const Ray up = from({0, 0, -2}, {0, 0, 1});
    CHECK(distance_to(floor, up) == 2);
    check_vector(surface_at(floor, up, 2).normal, {0, 0, -1}, 0);
    CHECK(distance_to(floor, from({0, 0, 3}, {0, 0, 1})) == no_distance);
    CHECK(distance_to(floor, from({0, 0, 3}, {1, 0, 0})) == no_distance);
    CHECK(distance_to(floor, from({0, 0, 0}, {1, 0, 0})) == no_distance);
    CHECK(distance_to(floor, from({0, 0, 0}, {0, 0, 1})) == no_distance);
}

TEST_CASE("sphere: chord at an offset h is 2 sqrt(r^2 - h^2)") {
    const Sphere sphere{.centre = {10, 0, 0}, .radius = 2};
    for (const double h : {0.0, 0.5, 1.0, 1.9, 1.999999}) {
        const double half_chord = std::sqrt(4 - h * h);
        const Ray outer = from({0, h, 0}, {1, 0, 0});
        CHECK(distance_to(sphere, outer) == about(10 - half_chord).epsilon(1e-14));
        check_vector(surface_at(sphere, outer, distance_to(sphere, outer)).normal,
                     {-half_chord / 2, h / 2, 0}, 1e-14);
        const Ray inner = from({10, h, 0}, {1, 0, 0});
        CHECK(distance_to(sphere, inner) == about(half_chord).epsilon(1e-12));
        CHECK(surface_at(sphere, inner, distance_to(sphere, inner)).normal.x() <= 0);
    }
    CHECK(distance_to(sphere, from({0, 2, 0}, {1, 0, 0})) == 10);
    CHECK(distance_to(sphere, from({0, 2.0000001, 0}, {1, 0, 0})) == no_distance);
    CHECK(distance_to(sphere, from({20, 0, 0}, {1, 0, 0})) == no_distance);
}

TEST_CASE("a small sphere far away keeps its shape") {
    // b^2 - (c^2 - r^2) in plain form would lose everything below 1e-4 m here: ulp of 1e12 m^2.
    const Sphere sphere{.centre = {1e6, 0, 0}, .radius = 0.5};
    const Ray ray = from({0, 0.3, 0}, {1, 0, 0});
    CHECK(std::abs(distance_to(sphere, ray) - (1e6 - 0.4)) < 1e-9);
    const SurfacePoint at = surface_at(sphere, ray, distance_to(sphere, ray));
    CHECK(std::abs((at.point - sphere.centre).norm() - 0.5) < 1e-9);
    CHECK(distance_to(sphere, from({0, 0.5001, 0}, {1, 0, 0})) == no_distance);
}

TEST_CASE("box: slabs in its own frame") {
    const double s = std::sqrt(0.5);
    Mat3 eighth;
    eighth << s, -s, 0, s, s, 0, 0, 0, 1;
    const Box box{.centre = {10, 0, 0}, .half_size = {1, 1, 3}, .rotation = eighth};
    // Straight at the vertical edge, and beside it where both faces have gone back by the offset.
    CHECK(distance_to(box, from({0, 0, 0}, {1, 0, 0})) == about(10 - std::sqrt(2.0)).epsilon(1e-15));
    const Ray beside = from({0, 0.25, 1}, {1, 0, 0});
    CHECK(distance_to(box, beside) == about(10 - std::sqrt(2.0) + 0.25).epsilon(1e-15));
    check_vector(surface_at(box, beside, distance_to(box, beside)).normal, {-s, s, 0}, 1e-15);
    const Ray inside = from({10, 0, 0}, {0, 0, 1});
    CHECK(distance_to(box, inside) == 3);
    check_vector(surface_at(box, inside, 3).normal, {0, 0, -1}, 0);
    CHECK(distance_to(box, from({0, 1.5, 0}, {1, 0, 0})) == no_distance);
    CHECK(distance_to(box, from({0, 0, 3.1}, {1, 0, 0})) == no_distance);
    CHECK(distance_to(box, from({20, 0, 0}, {1, 0, 0})) == no_distance);
}

TEST_CASE("a ray in the plane of a face, or along an edge, meets the box") {
    const Box box;
    for (const double z : {1.0, -1.0})
        for (const double y : {1.0, 0.3, -1.0}) {
            CHECK(distance_to(box, from({-5, y, z}, {1, 0, 0})) == 4);
            CHECK(surface_at(box, from({-5, y, z}, {1, 0, 0}), 4).point == Vec3(-1, y, z));
        }
    CHECK(distance_to(box, from({-5, 0, 1.0000001}, {1, 0, 0})) == no_distance);
}

TEST_CASE("cylinder: side, caps, and along the axis") {
    const Cylinder post{.base = {10, 0, -1}, .axis = Vec3::UnitZ(), .length = 4, .radius = 0.5};
    CHECK(distance_to(post, from({0, 0.3, 0}, {1, 0, 0})) == about(9.6).epsilon(1e-15));
    const Ray at_side = from({0, 0.3, 0}, {1, 0, 0});
    check_vector(surface_at(post, at_side, distance_to(post, at_side)).normal, {-0.8, 0.6, 0}, 1e-14);
    const Ray down = from({10.1, 0.2, 5}, {0, 0, -1});
    CHECK(distance_to(post, down) == 2);
    check_vector(surface_at(post, down, 2).normal, {0, 0, 1}, 0);
    check_vector(surface_at(post, down, 2).point, {10.1, 0.2, 3}, 1e-15);
    const Ray up_inside = from({10.1, 0.2, 0}, {0, 0, 1});
    CHECK(distance_to(post, up_inside) == 3);
    check_vector(surface_at(post, up_inside, 3).normal, {0, 0, -1}, 0);
    // In by a cap and out by the side: the cap at height 3 is met after 1 / cos 45 deg.
    CHECK(distance_to(post, from({9, 0, 4}, {1, 0, -1})) == about(std::sqrt(2.0)).epsilon(1e-15));
    CHECK(distance_to(post, from({0, 0, 3.1}, {1, 0, 0})) == no_distance);
    CHECK(distance_to(post, from({0, 0.51, 0}, {1, 0, 0})) == no_distance);
    CHECK(distance_to(post, from({10.6, 0, 5}, {0, 0, -1})) == no_distance);
}

TEST_CASE("cylinder: a ray almost along the axis meets the side where it should") {
    // A slope of 1e-6 towards a side 1e-6 m away: 1 m. Rounding of places and directions, 1e-16, moves that
    // by 1e-10.
    RandomStream random(33);
    constexpr double slope = 1e-6;
    for (int i = 0; i < 200; ++i) {
        const Mat3 pose = random_rotation(random);
        const Cylinder mast{
            .base = Vec3::Zero(), .axis = pose.col(2).normalized(), .length = 100, .radius = 1};
        const Ray ray =
            from(pose * Vec3(1 + slope, 0, 10), pose * Vec3(-slope, 0, std::sqrt(1 - slope * slope)));
        CHECK(std::abs(distance_to(mast, ray) - 1) < 1e-8);
    }
}

TEST_CASE("triangle: crossing, rim and back side") {
    const Triangle triangle{.a = {1, 0, 0}, .b = {1, 1, 0}, .c = {1, 0, 1}};
    const auto distance = [&](const Ray& ray) { return distance_to(triangle, sheared(ray), ray); };
    const Ray ray = from({0, 0.25, 0.25}, {1, 0, 0});
    CHECK(distance(ray) == 1);
    check_vector(surface_at(triangle, ray).point, {1, 0.25, 0.25}, 1e-16);
    check_vector(surface_at(triangle, ray).normal, {-1, 0, 0}, 0);
    const Ray back = from({3, 0.25, 0.25}, {-1, 0, 0});
    CHECK(distance(back) == 2);
    check_vector(surface_at(triangle, back).normal, {1, 0, 0}, 0);
    CHECK(distance(from({0, 0, 0}, {1, 0, 0})) == 1);
    CHECK(distance(from({0, 0.5, 0.5}, {1, 0, 0})) == 1);
    CHECK(distance(from({0, 0.6, 0.5}, {1, 0, 0})) == no_distance);
    CHECK(distance(from({0, -1e-9, 0.5}, {1, 0, 0})) == no_distance);
    CHECK(distance(from({1, -1, 0.2}, {0, 1, 0})) == no_distance);  // edge-on
}

TEST_CASE("near and far bound every shape: near is left out, far belongs to it") {
    const auto check = [](const auto& shape, double first, double second) {
        Ray ray;
        CHECK(distance_to(shape, ray) == first);
        ray.near = first;
        CHECK(distance_to(shape, ray) == second);
        ray.far = second;
        CHECK(distance_to(shape, ray) == second);
        ray.near = second;
        CHECK(distance_to(shape, ray) == no_distance);
        ray = {.far = first};
        CHECK(distance_to(shape, ray) == first);
        ray.far = std::nextafter(first, 0);
        CHECK(distance_to(shape, ray) == no_distance);
    };
    check(Sphere{.centre = {8, 0, 0}, .radius = 2}, 6, 10);
    check(Box{.centre = {8, 0, 0}, .half_size = {2, 1, 1}}, 6, 10);
    check(Cylinder{.base = {6, 0, 0}, .axis = {1, 0, 0}, .length = 4, .radius = 1}, 6, 10);
    check(Cylinder{.base = {8, 0, -1}, .axis = {0, 0, 1}, .length = 4, .radius = 2}, 6, 10);
    Ray ray{.near = 4, .far = 5};
    const Plane plane{.point = {5, 0, 0}, .normal = Vec3::UnitX()};
    CHECK(distance_to(plane, ray) == 5);
    ray.near = 5;
    CHECK(distance_to(plane, ray) == no_distance);
}

TEST_CASE("surfaces obey their laws under random rays") {
    RandomStream random(31);
    for (int i = 0; i < 3; ++i) {
        check_laws(Sphere{.centre = random_place(random, 1), .radius = between(random, 0.3, 2)}, 100 + i);
        check_laws(Box{.centre = random_place(random, 1),
                       .half_size = {between(random, 0.3, 2), 0.7, between(random, 0.3, 2)},
                       .rotation = random_rotation(random)},
                   200 + i);
        check_laws(Cylinder{.base = random_place(random, 1),
                            .axis = random_direction(random),
                            .length = between(random, 0.3, 2),
                            .radius = between(random, 0.3, 2)},
                   300 + i);
    }
}

TEST_CASE("bounds hold their shape and touch it on every side") {
    RandomStream random(32);
    const auto check = [&](const auto& shape) {
        const Bounds bounds = bounds_of(shape);
        Bounds seen;
        const double reach = (bounds.high - bounds.low).norm();
        for (int i = 0; i < 40000; ++i) {
            const Vec3 target = bounds.centre() + random_place(random, reach / 2);
            const Vec3 origin = bounds.centre() + 3 * reach * random_direction(random);
            const Ray ray = from(origin, target - origin);
            const double distance = distance_to(shape, ray);
            if (distance != no_distance) seen.add(surface_at(shape, ray, distance).point);
        }
        const double slack = 1e-14 * reach;
        CHECK((seen.low.array() >= bounds.low.array() - slack).all());
        CHECK((seen.high.array() <= bounds.high.array() + slack).all());
        // A corner of a box is met within 10 % of the size only now and then; a wrong formula is off by more.
        CHECK((seen.low - bounds.low).maxCoeff() < 0.1 * reach);
        CHECK((bounds.high - seen.high).maxCoeff() < 0.1 * reach);
    };
    for (int i = 0; i < 3; ++i) {
        check(Sphere{.centre = random_place(random, 1), .radius = 0.7});
        check(Box{.centre = random_place(random, 1),
                  .half_size = {1, 0.5, 2},
                  .rotation = random_rotation(random)});
        check(Cylinder{
            .base = random_place(random, 1), .axis = random_direction(random), .length = 2, .radius = 0.6});
    }
    CHECK(half_area(Bounds{}) == 0);
    CHECK(half_area(Bounds{.low = {0, 0, 0}, .high = {1, 2, 3}}) == 2 + 6 + 3);
}
