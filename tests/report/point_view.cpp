// Clouds of points: viewpoint, hiding, sizes, cut-away, and nearest neighbours against a plain search.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/report/point_view.h>

#include "../../src/report/camera.h"
#include "../../src/report/neighbours.h"

#include <doctest/doctest.h>
#include <Eigen/Eigenvalues>
#include <algorithm>
#include <cmath>

using namespace glint;

namespace {

/// Pixels that look like the colour of a mark, shading and blending allowed for.
int count_like(const Canvas& canvas, const Colour& colour) {
    const Oklab wanted = to_oklab(colour);
    int count = 0;
    for (std::size_t i = 0; i < canvas.pixels().size(); i += 3) {
        const Oklab seen = to_oklab(rgb8(canvas.pixels()[i], canvas.pixels()[i + 1], canvas.pixels()[i + 2]));
        const double hue = std::hypot(seen.a - wanted.a, seen.b - wanted.b);
        count += hue < 0.03 && std::abs(seen.lightness - wanted.lightness) < 0.12;
    }
    return count;
}

PointView plain(std::vector<Mark> marks) {
    PointView view{.marks = std::move(marks)};
    view.colours = {.label = "w", .range = AxisRange{0, 1}};
    view.floor = Floor::none;
    view.size = {.width = 640, .height = 480, .density = 1};
    return view;
}

/// A level square of `count` x `count` marks.
void add_square(std::vector<Mark>& marks, const Vec3& centre, double half, int count, double value) {
    for (int i = 0; i < count; ++i)
        for (int j = 0; j < count; ++j)
            marks.push_back(
                {.position = centre + half * Vec3{2.0 * i / (count - 1) - 1, 2.0 * j / (count - 1) - 1, 0},
                 .value = value});
}

}  // namespace

TEST_CASE("the viewpoint is raised, behind and beside the sensor, and has everything in view") {
    RandomStream random(61);
    for (int i = 0; i < 40; ++i) {
        PointView view;
        const Vec3 extent = std::pow(10, -1 + 2.5 * random.uniform()) *
                            Vec3{1, 0.2 + random.uniform(), 0.1 + 0.5 * random.uniform()};
        for (int k = 0; k < 200; ++k)
            view.marks.push_back({.position = extent.cwiseProduct(
                                      Vec3{random.uniform(), random.uniform() - 0.5, random.uniform() - 0.5}),
                                  .value = 1});
        const Viewpoint viewpoint = automatic_viewpoint(view);
        CHECK(viewpoint.eye.x() < 0);
        CHECK(viewpoint.eye.y() < 0);
        CHECK(viewpoint.eye.z() > extent.z() / 2);
        const PageBox page{0, 0, view.size.width, view.size.height};
        const Camera camera = camera_of(viewpoint, page);
        // One mark in a thousand each way may stray out.
        int outside = 0;
        for (const Mark& mark : view.marks) {
            const Sight sight = camera.see(mark.position);
            outside +=
                !(sight.depth > 0 && page.holds({sight.at.x(), sight.at.y(), sight.at.x(), sight.at.y()}));
        }
        CHECK(outside == 0);
    }
}

TEST_CASE("a camera sees along its rays") {
    RandomStream random(62);
    const PageBox page{0, 0, 1280, 800};
    for (int i = 0; i < 500; ++i) {
        const auto anywhere = [&] {
            return Vec3{random.uniform() - 0.5, random.uniform() - 0.5, random.uniform() - 0.5};
        };
        const Camera camera =
            camera_of({.eye = 5 * anywhere(), .target = anywhere(), .field = 0.3 + random.uniform()}, page);
        CHECK(camera.see(camera.eye + 3 * camera.forward).at.x() == doctest::Approx(640));
        const Vec3 point = camera.eye + camera.forward * (1 + random.uniform()) +
                           camera.right * (random.uniform() - 0.5) + camera.up * (random.uniform() - 0.5);
        const Sight sight = camera.see(point);
        CHECK((camera.eye + sight.depth * camera.ray(sight.at) - point).norm() < 1e-9);
        // Up in space is up on the page.
        CHECK(camera.see(point + 0.01 * camera.up).at.y() < sight.at.y());
    }
    // The vertical field fills the height: tan of half the field is half the height over the focal length.
    const Camera camera = camera_of({.eye = {-1, 0, 0}, .target = {0, 0, 0}, .field = pi / 2}, page);
    CHECK(camera.focal == doctest::Approx(400));
    CHECK_THROWS_AS(static_cast<void>(camera_of({.eye = {0, 0, 5}, .target = {0, 0, 0}}, page)), Error);
    CHECK_THROWS_AS(static_cast<void>(camera_of({.eye = {1, 1, 1}, .target = {1, 1, 1}}, page)), Error);
    CHECK_THROWS_AS(static_cast<void>(camera_of({.eye = {1, 0, 0}, .target = {0, 0, 0}, .field = 0}, page)),
                    Error);
}

TEST_CASE("a viewpoint never comes so near that a point is behind it") {
    // A line of points along the line of sight looks like one point from any distance.
    const Vec3 direction{-0.72, -0.42, 0.50};
    std::vector<Vec3> points;
    for (int i = 0; i <= 10; ++i) points.push_back(i * direction);
    const Camera camera = camera_of(viewpoint_around(points, direction, 1.5, 0.9), {0, 0, 300, 200});
    for (const Vec3& point : points) CHECK(camera.see(point).depth > 0.5);
}

TEST_CASE("nearer marks hide farther ones, whatever their order") {
    for (const bool near_first : {true, false}) {
        std::vector<Mark> marks{{.position = {2, 0, 0}, .value = 0.2}, {.position = {4, 0, 0}, .value = 0.9}};
        if (!near_first) std::swap(marks[0], marks[1]);
        PointView view = plain(marks);
        view.viewpoint = Viewpoint{.eye = {-2, 0, 0}, .target = {2, 0, 0}, .field = 0.6};
        view.sensor = {0, 10, 0};
        const Canvas canvas = draw(view);
        CHECK(count_like(canvas, sequential_colour(0.2)) >
              20 + count_like(draw(plain({})), sequential_colour(0.2)));
        PointView far_only = view;
        far_only.marks = {{.position = {4, 0, 0}, .value = 0.9}};
        CHECK(count_like(canvas, sequential_colour(0.9)) <
              count_like(draw(far_only), sequential_colour(0.9)));
    }
}

TEST_CASE("nearer marks are larger") {
    PointView near = plain({{.position = {1, 0, 0}, .value = 0.5}}),
              far = plain({{.position = {6, 0, 0}, .value = 0.5}});
    near.viewpoint = far.viewpoint = Viewpoint{.eye = {-2, 0, 0}, .target = {2, 0, 0}, .field = 0.6};
    near.sensor = far.sensor = {0, 10, 0};
    const int ground = count_like(draw(plain({})), sequential_colour(0.5));
    CHECK(count_like(draw(near), sequential_colour(0.5)) - ground >
          count_like(draw(far), sequential_colour(0.5)) - ground);
}

TEST_CASE("a dense square closes up to a surface of its colour") {
    std::vector<Mark> marks;
    add_square(marks, {3, 0, -1}, 1, 60, 0.5);
    PointView view = plain(marks);
    view.viewpoint = Viewpoint{.eye = {-1, 0, 3}, .target = {3, 0, -1}, .field = 0.6};
    view.sensor = {0, 10, 0};
    const Canvas canvas = draw(view);
    // The quadrilateral of the square's corners, as the camera sees it.
    FrameContent content{.colours = settle(view.colours, {})};
    const Camera camera = camera_of(*view.viewpoint, lay_out({0, 0, 640, 480}, content).plot);
    const Vec2 a = camera.see({2, -1, -1}).at, b = camera.see({4, -1, -1}).at, c = camera.see({4, 1, -1}).at,
               d = camera.see({2, 1, -1}).at;
    const auto cross = [](const Vec2& p, const Vec2& q) { return p.x() * q.y() - p.y() * q.x(); };
    const double area = std::abs(cross(c - a, d - b)) / 2;
    const int ground = count_like(draw(plain({})), sequential_colour(0.5));
    // Marks a = 2/59 m apart have their 6th neighbour at a * sqrt(2) and reach 0.68 of that over the border.
    const double grown = area * std::pow(1 + 2 * 0.68 * std::sqrt(2.0) / 59, 2);
    CHECK(count_like(canvas, sequential_colour(0.5)) - ground == doctest::Approx(grown).epsilon(0.04));
}

TEST_CASE("a ceiling seen from above is cut away and shows what is under it") {
    std::vector<Mark> marks;
    add_square(marks, {3, 0, -1}, 1, 60, 0.2);
    add_square(marks, {3, 0, -0.8}, 1, 60, 0.8);
    PointView view = plain(marks);
    view.sensor = {0, 0, -0.9};
    const Canvas cut = draw(view);
    view.cut_away = false;
    const Canvas whole = draw(view);
    CHECK(count_like(cut, sequential_colour(0.2)) > 3 * count_like(whole, sequential_colour(0.2)));
    CHECK(count_like(cut, sequential_colour(0.8)) < 0.2 * count_like(whole, sequential_colour(0.8)));
    const auto noted = [](const Canvas& canvas) {
        return std::any_of(canvas.labels().begin(), canvas.labels().end(),
                           [](const Label& label) { return label.text.starts_with("Cut away"); });
    };
    CHECK(noted(cut));
    CHECK_FALSE(noted(whole));
}

TEST_CASE("the floor is marked in metres") {
    std::vector<Mark> marks;
    add_square(marks, {4, 0, -1}, 4, 40, 0.5);
    PointView view = plain(marks);
    view.size = {.width = 1280, .height = 800, .density = 1};
    for (const Floor floor : {Floor::grid, Floor::rings}) {
        view.floor = floor;
        const Canvas canvas = draw(view);
        for (const char* wanted : {"2 m", "3 m", "4 m"})
            CHECK_MESSAGE(std::any_of(canvas.labels().begin(), canvas.labels().end(),
                                      [&](const Label& label) { return label.text == wanted; }),
                          wanted);
    }
}

TEST_CASE("neighbours by the tree are those of a plain search") {
    RandomStream random(63);
    for (const std::size_t count : {1u, 2u, 5u, 20u, 400u}) {
        std::vector<Vec3> points;
        for (std::size_t i = 0; i < count; ++i)
            // Some of the points coincide in a coordinate or altogether.
            points.push_back(
                {random.uniform(), std::floor(8 * random.uniform()), i % 7 == 0 ? 0.5 : random.uniform()});
        if (count > 10) points[3] = points[4];
        std::vector<std::vector<double>> distances(count);
        std::vector<std::vector<std::size_t>> order(count);
        for (std::size_t i = 0; i < count; ++i) {
            for (std::size_t j = 0; j < count; ++j) order[i].push_back(j);
            std::stable_sort(order[i].begin(), order[i].end(), [&](std::size_t a, std::size_t b) {
                return (points[a] - points[i]).norm() < (points[b] - points[i]).norm();
            });
            for (const std::size_t j : order[i]) distances[i].push_back((points[j] - points[i]).norm());
        }
        const std::vector<LocalSurface> surfaces = local_surfaces(points);
        for (std::size_t i = 0; i < count; ++i) {
            CHECK(surfaces[i].closest == doctest::Approx(distances[i][std::min<std::size_t>(3, count - 1)]));
            std::vector<double> around;
            for (std::size_t k = 0; k < std::min<std::size_t>(9, count); ++k)
                around.push_back(distances[order[i][k]][std::min<std::size_t>(6, count - 1)]);
            std::sort(around.begin(), around.end());
            CHECK(surfaces[i].spacing == doctest::Approx(around[around.size() / 2]));
        }
    }
}

TEST_CASE("a plane is found flat, with its normal; a ball of points is not") {
    RandomStream random(64);
    std::vector<Vec3> plane, ball;
    const Vec3 normal = Vec3{1, 2, 3}.normalized(), u = Vec3{2, -1, 0}.normalized(), v = normal.cross(u);
    for (int i = 0; i < 2000; ++i) {
        plane.push_back(10 * random.uniform() * u + 10 * random.uniform() * v +
                        0.01 * random.uniform() * normal);
        ball.push_back({random.uniform(), random.uniform(), random.uniform()});
    }
    std::size_t flat = 0;
    for (const LocalSurface& surface : local_surfaces(plane)) {
        flat += surface.flat;
        if (surface.flat) CHECK(std::abs(surface.normal.dot(normal)) > 0.99);
        // Poisson statistics: the 6th of n points a unit area lies at 1.4 / sqrt(n) on average, here 0.31.
        CHECK(surface.spacing > 0.15);
        CHECK(surface.spacing < 0.7);
    }
    CHECK(flat == plane.size());
    // The plane through the point and its 20 nearest, by a plain search.
    const std::vector<LocalSurface> found = local_surfaces(plane);
    for (std::size_t i = 0; i < 100; ++i) {
        std::vector<Vec3> near = plane;
        std::sort(near.begin(), near.end(), [&](const Vec3& a, const Vec3& b) {
            return (a - plane[i]).norm() < (b - plane[i]).norm();
        });
        near.resize(21);
        Vec3 mean = Vec3::Zero();
        for (const Vec3& point : near) mean += point / 21;
        Mat3 spread = Mat3::Zero();
        for (const Vec3& point : near) spread += (point - mean) * (point - mean).transpose();
        const Vec3 plain = Eigen::SelfAdjointEigenSolver<Mat3>(spread).eigenvectors().col(0);
        CHECK(std::abs(plain.dot(found[i].normal)) == doctest::Approx(1).epsilon(1e-10));
    }
    std::size_t solid = 0;
    for (const LocalSurface& surface : local_surfaces(ball)) solid += !surface.flat;
    CHECK(solid > ball.size() / 2);
}
