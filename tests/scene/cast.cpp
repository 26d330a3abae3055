// Casting into whole scenes, against a slow loop over everything.
#include "scene/support.h"

#include <doctest/doctest.h>
#include <cstring>

using namespace glint;
using namespace glint::testing;

TEST_CASE("200,000 random rays agree with a loop over all shapes") {
    struct Case {
        int each;
        double reach;
        bool planes;
        int rays;
    };
    const Case cases[] = {{1, 1, false, 20000},  {2, 1, true, 40000},    {3, 10, false, 40000},
                          {5, 100, true, 40000}, {4, 1e-3, true, 30000}, {12, 10, false, 30000}};
    std::uint64_t seed = 500;
    for (const Case& it : cases) {
        const SceneParts parts = strewn(++seed, it.each, it.reach, it.planes);
        const Scene scene = build_scene(parts);
        RandomStream random(seed);
        int faults = 0, hits = 0, unlike = 0;
        for (int i = 0; i < it.rays; ++i) {
            Ray ray = random_ray(random, 1.2 * it.reach);
            if (i % 4 == 0) ray.near = it.reach * random.uniform();
            if (i % 3 == 0) ray.far = ray.near + it.reach * random.uniform();
            const std::optional<Hit> hit = closest_hit(scene, ray);
            hits += hit.has_value();
            if (hit) {
                if (hit->material != parts.objects[hit->object].material) ++faults;
                if (!(hit->normal.dot(ray.direction) <= 0)) ++faults;
                if (!((hit->point - ray.origin - hit->distance * ray.direction).norm() < 1e-7 * it.reach))
                    ++faults;
            }
            unlike += occluded(scene, ray) != hit.has_value();
            // The slow caster judges distances to 1e-6 m: bring millimetre scenes to metres.
            const std::string wrong = it.reach >= 1 ? disagreement(parts, ray, hit) : "";
            if (!wrong.empty() && ++faults < 5) MESSAGE("scene " << seed << ", ray " << i << ": " << wrong);
        }
        CHECK(faults == 0);
        CHECK(unlike == 0);
        CHECK(hits > it.rays / 100);
        CHECK(hits < it.rays);
    }
}

TEST_CASE("close layers with interlocking bounds are met in the right order") {
    // Sheets 10 m away, tilted by a milliradian each its own way: their bounds reach a millimetre into each
    // other while the surfaces lie 10 um apart, so the first bounds entered are seldom those of the first
    // hit.
    RandomStream random(71);
    SceneParts parts;
    parts.materials = {grey()};
    for (int i = 0; i < 64; ++i) {
        parts.objects.push_back({.name = "sheet" + std::to_string(i)});
        const double x = 10 + 1e-5 * static_cast<double>(random.below(64));
        const double up = between(random, -1e-3, 1e-3), left = between(random, -1e-3, 1e-3);
        const Mesh sheet{.vertices = {{x - left - up, -1, -1},
                                      {x + left - up, 1, -1},
                                      {x + left + up, 1, 1},
                                      {x - left + up, -1, 1}},
                         .triangles = {{{0, 1, 2}}, {{0, 2, 3}}}};
        parts.meshes.push_back({sheet, i});
    }
    const Scene scene = build_scene(parts);
    int faults = 0;
    for (int i = 0; i < 3000; ++i) {
        const Vec3 direction(10, between(random, -0.9, 0.9), between(random, -0.9, 0.9));
        const Ray ray{.direction = direction.normalized()};
        faults += !disagreement(parts, ray, closest_hit(scene, ray)).empty();
    }
    CHECK(faults == 0);
}

TEST_CASE("the same scene a thousand times smaller gives the same hits a thousand times nearer") {
    // 1024 is a power of two, so that every number scales without rounding; only the widening of bounds and
    // the tree could make a difference, and must not.
    SceneParts small = strewn(77, 6, 10, true);
    const Scene large_scene = build_scene(small);
    for (auto& plane : small.planes) plane.shape.point /= 1024;
    for (auto& sphere : small.spheres) sphere.shape.centre /= 1024, sphere.shape.radius /= 1024;
    for (auto& box : small.boxes) box.shape.centre /= 1024, box.shape.half_size /= 1024;
    for (auto& c : small.cylinders) c.shape.base /= 1024, c.shape.length /= 1024, c.shape.radius /= 1024;
    for (auto& mesh : small.meshes)
        mesh.shape = transformed(mesh.shape, Mat3::Identity() / 1024, Vec3::Zero());
    const Scene small_scene = build_scene(small);
    RandomStream random(77);
    int unlike = 0;
    for (int i = 0; i < 20000; ++i) {
        Ray ray = random_ray(random, 12);
        const std::optional<Hit> large_hit = closest_hit(large_scene, ray);
        ray.origin /= 1024;
        const std::optional<Hit> small_hit = closest_hit(small_scene, ray);
        if (large_hit.has_value() != small_hit.has_value())
            ++unlike;
        else if (large_hit)
            unlike += large_hit->distance != 1024 * small_hit->distance ||
                      large_hit->object != small_hit->object || large_hit->normal != small_hit->normal;
    }
    CHECK(unlike == 0);
}

TEST_CASE("turning scene and rays together turns the hits") {
    const SceneParts parts = strewn(91, 8, 5, true);
    const Scene scene = build_scene(parts);
    RandomStream random(92);
    for (int turn = 0; turn < 3; ++turn) {
        const Mat3 rotation = random_rotation(random);
        const Vec3 offset = random_place(random, 3);
        SceneParts turned = parts;
        const auto move = [&](Vec3& place) { place = rotation * place + offset; };
        for (auto& plane : turned.planes)
            move(plane.shape.point), plane.shape.normal = rotation * plane.shape.normal;
        for (auto& sphere : turned.spheres) move(sphere.shape.centre);
        for (auto& box : turned.boxes)
            move(box.shape.centre), box.shape.rotation = rotation * box.shape.rotation;
        for (auto& c : turned.cylinders) move(c.shape.base), c.shape.axis = rotation * c.shape.axis;
        for (auto& mesh : turned.meshes) mesh.shape = transformed(mesh.shape, rotation, offset);
        const Scene turned_scene = build_scene(turned);
        int unlike = 0, hits = 0;
        for (int i = 0; i < 10000; ++i) {
            const Ray ray = random_ray(random, 6);
            const Ray turned_ray{.origin = rotation * ray.origin + offset,
                                 .direction = (rotation * ray.direction).normalized()};
            const std::optional<Hit> a = closest_hit(scene, ray), b = closest_hit(turned_scene, turned_ray);
            unlike += a.has_value() != b.has_value();
            if (!a || !b) continue;
            ++hits;
            // Rounding of the direction and of places of 10 m (ten units in the last place, say) moves the
            // ray sideways; that shows in the distance over the cosine, and in normals over the radius.
            const double slack = 1e-14 * (10 + a->distance) / std::max(-a->normal.dot(ray.direction), 1e-6);
            unlike += a->object != b->object || std::abs(a->distance - b->distance) > slack ||
                      (rotation * a->point + offset - b->point).norm() > slack ||
                      (rotation * a->normal - b->normal).norm() > 20 * slack;
        }
        CHECK(unlike == 0);
        CHECK(hits > 5000);
    }
}

TEST_CASE("at equal distances the lower object wins, whatever the order of the shapes") {
    SceneParts parts;
    parts.materials = {grey()};
    parts.objects = {{.name = "paint"}, {.name = "floor"}, {.name = "plate"}};
    const Mesh square{.vertices = {{-1, -1, 0}, {1, -1, 0}, {1, 1, 0}, {-1, 1, 0}},
                      .triangles = {{{0, 1, 2}}, {{0, 2, 3}}}};
    parts.planes = {{{}, 1}};
    parts.meshes = {{square, 2}, {square, 0}, {square, 2}};
    const Ray down{.origin = {0.3, 0.2, 2}, .direction = -Vec3::UnitZ()};
    CHECK(closest_hit(build_scene(parts), down)->object == 0);
    std::swap(parts.meshes[0], parts.meshes[1]);
    CHECK(closest_hit(build_scene(parts), down)->object == 0);
    parts.meshes.erase(parts.meshes.begin());
    CHECK(closest_hit(build_scene(parts), down)->object == 1);
    parts.planes.clear();
    CHECK(closest_hit(build_scene(parts), down)->object == 2);
}

TEST_CASE("an empty scene and rays that are no rays meet nothing") {
    const Scene empty = build_scene({});
    CHECK_FALSE(closest_hit(empty, {}));
    CHECK_FALSE(occluded(empty, {}));
    CHECK(empty.bounds.empty());

    const Scene full = build_scene(strewn(5, 5, 3, true));
    const double nan = std::numeric_limits<double>::quiet_NaN(),
                 inf = std::numeric_limits<double>::infinity();
    const Ray good{.origin = {0, 0, 0}, .direction = -Vec3::UnitZ()};
    REQUIRE(closest_hit(full, good));
    const auto misses = [&](const Ray& ray) {
        CHECK_FALSE(closest_hit(full, ray));
        CHECK_FALSE(occluded(full, ray));
        CHECK(cast_work(full, ray).nodes == 0);
    };
    for (const double bad : {nan, inf, -inf})
        for (int k = 0; k < 3; ++k) {
            Ray ray = good;
            ray.origin[k] = bad;
            misses(ray);
            ray = good;
            ray.direction[k] = bad;
            misses(ray);
            ray = good;
            ray.near = bad;
            misses(ray);
        }
    Ray ray = good;
    ray.far = nan;
    misses(ray);
    ray.far = -inf;
    misses(ray);
    ray = good;
    ray.direction.setZero();
    misses(ray);
    ray = {.origin = {1e300, 1e300, 1e300}, .direction = Vec3(-1, -1, -1).normalized()};
    if (const std::optional<Hit> hit = closest_hit(full, ray)) CHECK(hit->point.allFinite());
}

TEST_CASE("rays along the axes, in faces and through corners give no NaN and no gaps") {
    // Zeros in the direction and origins exactly in the planes of bounds, where 0 * infinity lurks.
    SceneParts parts;
    parts.materials = {grey()};
    parts.objects = {{.name = "blocks"}};
    for (int x = 0; x < 4; ++x)
        for (int y = 0; y < 4; ++y)
            for (int z = 0; z < 4; ++z)
                parts.boxes.push_back({{.centre = Vec3(x, y, z), .half_size = {0.5, 0.5, 0.5}}, 0});
    const Scene scene = build_scene(parts);
    int missed = 0;
    for (int axis = 0; axis < 3; ++axis)
        for (int sign = -1; sign <= 1; sign += 2)
            for (int i = 0; i <= 8; ++i)
                for (int j = 0; j <= 8; ++j) {
                    Ray ray;
                    ray.direction = sign * Vec3::Unit(axis);
                    ray.origin[axis] = sign > 0 ? -2.5 : 5.5;
                    ray.origin[(axis + 1) % 3] = -0.5 + 0.5 * i;
                    ray.origin[(axis + 2) % 3] = -0.5 + 0.5 * j;
                    const std::optional<Hit> hit = closest_hit(scene, ray);
                    missed += !hit || hit->distance != 2 || !hit->point.allFinite();
                    missed += !occluded(scene, ray);
                }
    CHECK(missed == 0);
}

TEST_CASE("rays that leave a flat surface by off_surface do not meet it again") {
    // A tilted floor out of triangles of very unlike sizes, a kilometre from the origin: its vertices are off
    // its plane by their rounding, 1e-13 m, so that it is full of steps of that height.
    RandomStream random(63);
    const Mat3 tilt = random_rotation(random);
    const Vec3 place(700, -500, 600), up = tilt.col(2);
    SceneParts parts;
    parts.materials = {grey()};
    parts.objects = {{.name = "floor"}};
    Mesh floor;
    for (int i = 0; i <= 40; ++i)
        for (int j = 0; j <= 40; ++j)
            floor.vertices.push_back(place +
                                     tilt * Vec3(std::pow(i - 20, 3) / 80, std::pow(j - 20, 3) / 80, 0));
    for (int i = 0; i < 40; ++i)
        for (int j = 0; j < 40; ++j) {
            const int a = 41 * i + j;
            floor.triangles.push_back({a, a + 1, a + 41});
            floor.triangles.push_back({a + 1, a + 42, a + 41});
        }
    parts.meshes = {{floor, 0}};
    const Scene scene = build_scene(parts);
    int again = 0, hits = 0, from_the_point_itself = 0;
    for (int i = 0; i < 50000; ++i) {
        const double reach = std::pow(10.0, between(random, -2, 1.99));
        const Vec3 target =
            place + tilt * Vec3(between(random, -reach, reach), between(random, -reach, reach), 0);
        const Vec3 origin = target + std::pow(10.0, between(random, -2, 2)) * (up + random_direction(random));
        const std::optional<Hit> hit =
            closest_hit(scene, {.origin = origin, .direction = (target - origin).normalized()});
        if (!hit) continue;
        ++hits;
        Vec3 out = random_direction(random);
        out -= out.dot(up) * up;
        out = (out.normalized() + std::pow(10.0, between(random, -9, 1)) * up).normalized();
        again += closest_hit(scene, {.origin = off_surface(*hit), .direction = out}).has_value();
        from_the_point_itself += closest_hit(scene, {.origin = hit->point, .direction = out}).has_value();
        again += (off_surface(*hit) - hit->point).norm() > 1e-10;
    }
    CHECK(again == 0);
    CHECK(hits > 40000);
    CHECK(from_the_point_itself > 1000);  // or the floor is too flat to try anything
    MESSAGE("of " << hits << " rays " << again << " met their surface again, and " << from_the_point_itself
                  << " without the push");
}

TEST_CASE("triangles without area neither break the tree nor give a NaN") {
    SceneParts parts;
    parts.materials = {grey()};
    parts.objects = {{.name = "sliver"}};
    Mesh mesh{.vertices = {{0, 0, 0}, {1, 0, 0}, {2, 0, 0}, {0, 1e-200, 0}}, .triangles = {}};
    for (int i = 0; i < 40; ++i) {
        mesh.triangles.push_back({0, 1, 2});
        mesh.triangles.push_back({1, 1, 1});
        mesh.triangles.push_back({0, 1, 3});
        mesh.triangles.push_back({0, 0, 1});
    }
    parts.meshes = {{mesh, 0}};
    const Scene scene = build_scene(parts);
    RandomStream random(3);
    for (int i = 0; i < 2000; ++i) {
        const Vec3 origin = random_place(random, 2), target = {2 * random.uniform(), 0, 0};
        const std::optional<Hit> hit =
            closest_hit(scene, {.origin = origin, .direction = (target - origin).normalized()});
        if (!hit) continue;
        CHECK(hit->point.allFinite());
        CHECK(std::abs(hit->normal.norm() - 1) < 1e-12);
    }
    CHECK(statistics(scene.hierarchy).largest_leaf <= 8);
}

TEST_CASE("building twice gives the same bytes") {
    const SceneParts parts = strewn(8, 20, 10, true);
    const Scene a = build_scene(parts), b = build_scene(parts);
    REQUIRE(a.hierarchy.nodes.size() == b.hierarchy.nodes.size());
    CHECK(std::memcmp(a.hierarchy.nodes.data(), b.hierarchy.nodes.data(),
                      a.hierarchy.nodes.size() * sizeof(Node)) == 0);
    CHECK(a.hierarchy.order == b.hierarchy.order);
}
