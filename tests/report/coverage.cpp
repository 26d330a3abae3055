// Drawing: areas of shapes against geometry, clipping, lines that cross themselves.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/report/canvas.h>

#include <doctest/doctest.h>
#include <algorithm>
#include <cmath>
#include <numeric>

using namespace glint;

namespace {

constexpr Colour black = rgb8(0, 0, 0);

/// Area of black on a white canvas, in square units.
double ink_area(const Canvas& canvas) {
    double sum = 0;
    for (std::size_t i = 0; i < canvas.pixels().size(); i += 3) sum += 255 - canvas.pixels()[i];
    return sum / 255 / (canvas.density() * canvas.density());
}

double covered(const Coverage& coverage) {
    return std::accumulate(coverage.share.begin(), coverage.share.end(), 0.0);
}

double signed_area(const std::vector<Vec2>& ring) {
    double sum = 0;
    for (std::size_t i = 0; i < ring.size(); ++i) {
        const Vec2 &a = ring[i], &b = ring[(i + 1) % ring.size()];
        sum += (a.x() * b.y() - a.y() * b.x()) / 2;
    }
    return sum;
}

/// A ring around `centre` with random radii, so that it does not cross itself.
std::vector<Vec2> star(RandomStream& random, const Vec2& centre, double radius) {
    std::vector<Vec2> ring;
    const int corners = 3 + static_cast<int>(random.below(12));
    for (int i = 0; i < corners; ++i) {
        const double angle = 2 * pi * (i + 0.8 * random.uniform()) / corners,
                     length = radius * (0.3 + 0.7 * random.uniform());
        ring.push_back(centre + length * Vec2{std::cos(angle), std::sin(angle)});
    }
    return ring;
}

int pixel_at(const Canvas& canvas, double x, double y) {
    const auto column = static_cast<std::size_t>(x * canvas.density()),
               row = static_cast<std::size_t>(y * canvas.density());
    return canvas.pixels()[(row * static_cast<std::size_t>(canvas.pixel_width()) + column) * 3];
}

}  // namespace

TEST_CASE("coverage of a polygon sums to its area") {
    RandomStream random(21);
    const PixelWindow window{.left = 0, .top = 0, .right = 100, .bottom = 80};
    for (int i = 0; i < 300; ++i) {
        const std::vector<Vec2> ring =
            star(random, {50 + random.uniform(), 40 + random.uniform()}, 3 + 35 * random.uniform());
        // Single precision of the shares: 1e-6 of some hundred pixels on the rim.
        CHECK(covered(cover({&ring, 1}, window)) ==
              doctest::Approx(std::abs(signed_area(ring))).epsilon(1e-4));
    }
}

TEST_CASE("coverage agrees with counting points inside") {
    RandomStream random(22);
    const PixelWindow window{.left = 0, .top = 0, .right = 12, .bottom = 10};
    for (int i = 0; i < 40; ++i) {
        std::vector<Vec2> triangle;
        for (int k = 0; k < 3; ++k)
            triangle.push_back({-6 + 24 * random.uniform(), -5 + 20 * random.uniform()});
        const double turn = signed_area(triangle) > 0 ? 1 : -1;
        const Coverage coverage = cover({&triangle, 1}, window);
        for (int row = window.top; row < window.bottom; ++row)
            for (int column = window.left; column < window.right; ++column) {
                constexpr int fine = 40;
                int inside = 0;
                for (int sample = 0; sample < fine * fine; ++sample) {
                    const Vec2 p{column + (sample % fine + 0.5) / fine, row + (sample / fine + 0.5) / fine};
                    bool all = true;
                    for (int k = 0; k < 3; ++k) {
                        const Vec2 edge = triangle[(k + 1) % 3] - triangle[k], to = p - triangle[k];
                        all = all && turn * (edge.x() * to.y() - edge.y() * to.x()) > 0;
                    }
                    inside += all;
                }
                const PixelWindow& narrow = coverage.window;
                const bool in_window = column >= narrow.left && column < narrow.right && row >= narrow.top &&
                                       row < narrow.bottom;
                const double share =
                    in_window ? coverage.share[static_cast<std::size_t>(row - narrow.top) * narrow.width() +
                                               (column - narrow.left)]
                              : 0;
                // Three edges, each misjudging up to one row or column of the samples.
                CHECK(std::abs(share - inside / double(fine * fine)) < 3.0 / fine);
            }
    }
}

TEST_CASE("a window shows the same part of a polygon as a larger one") {
    RandomStream random(23);
    const PixelWindow large{.left = -60, .top = -60, .right = 160, .bottom = 160};
    for (int i = 0; i < 60; ++i) {
        const std::vector<Vec2> ring = star(random, {50, 40}, 90);
        const PixelWindow small{.left = static_cast<int>(random.below(40)),
                                .top = static_cast<int>(random.below(30)),
                                .right = 70,
                                .bottom = 60};
        const Coverage all = cover({&ring, 1}, large), part = cover({&ring, 1}, small);
        for (int row = part.window.top; row < part.window.bottom; ++row)
            for (int column = part.window.left; column < part.window.right; ++column) {
                const float a =
                    all.share[static_cast<std::size_t>(row - all.window.top) * all.window.width() +
                              (column - all.window.left)];
                const float b =
                    part.share[static_cast<std::size_t>(row - part.window.top) * part.window.width() +
                               (column - part.window.left)];
                CHECK(std::abs(a - b) < 1e-4f);
            }
    }
}

TEST_CASE("a ring that runs the other way is a hole") {
    const std::vector<std::vector<Vec2>> rings{{{10, 10}, {50, 10}, {50, 50}, {10, 50}},
                                               {{20.5, 20}, {20.5, 40}, {40, 40}, {40, 20}}};
    CHECK(covered(cover(rings, {.left = 0, .top = 0, .right = 60, .bottom = 60})) ==
          doctest::Approx(1600 - 390).epsilon(1e-5));
}

TEST_CASE("discs have the area of discs") {
    RandomStream random(24);
    for (int i = 0; i < 60; ++i) {
        Canvas canvas(60, 60, i % 2 == 0 ? 2 : 1);
        const double radius = 0.6 + 25 * random.uniform();
        canvas.fill_disc({30 + random.uniform(), 30 + random.uniform()}, radius, black);
        // Rounding to bytes: half a step on each of the rim's pixels, at random, and at most 0.5 % on the
        // smallest.
        CHECK(ink_area(canvas) == doctest::Approx(pi * radius * radius).epsilon(0.005));
    }
}

TEST_CASE("polygons and boxes have their area on the canvas") {
    RandomStream random(25);
    for (int i = 0; i < 40; ++i) {
        Canvas canvas(80, 80);
        const std::vector<Vec2> ring = star(random, {40, 40}, 10 + 28 * random.uniform());
        canvas.fill_polygon(ring, black);
        CHECK(ink_area(canvas) == doctest::Approx(std::abs(signed_area(ring))).epsilon(0.005));
    }
    Canvas canvas(20, 20);
    canvas.fill_box({5, 6, 10, 8}, black);
    CHECK(ink_area(canvas) == 10);
    CHECK(pixel_at(canvas, 5.1, 6.1) == 0);
    CHECK(pixel_at(canvas, 4.9, 6.1) == 255);
}

TEST_CASE("lines have the area of their length, width and ends") {
    const Vec2 from{12.3, 17.1}, to{71.9, 55.5};
    const double length = (to - from).norm();
    for (const double width : {0.7, 1.0, 3.0, 9.0}) {
        Canvas butt(90, 70), round(90, 70), dashed(90, 70);
        butt.line(from, to, {.colour = black, .width = width, .cap = Cap::butt, .dashes = {}});
        round.line(from, to, {.colour = black, .width = width, .dashes = {}});
        dashed.line(from, to,
                    {.colour = black,
                     .width = width,
                     .cap = Cap::butt,
                     .dashes = {length / 5, length / 10, length / 10, length / 10}});
        CHECK(ink_area(butt) == doctest::Approx(length * width).epsilon(0.005));
        // The round ends are polygons inside the circle: a little less than its area.
        CHECK(ink_area(round) == doctest::Approx(length * width + pi * width * width / 4).epsilon(0.006));
        CHECK(ink_area(dashed) == doctest::Approx(0.6 * length * width).epsilon(0.01));
    }
}

TEST_CASE("a line that crosses itself covers every pixel once") {
    Canvas canvas(60, 60);
    canvas.polyline(std::vector<Vec2>{{10, 30}, {50, 30}, {50, 10}, {30, 10}, {30, 50}},
                    {.colour = with_alpha(black, 0.5), .width = 6, .dashes = {}});
    CHECK(pixel_at(canvas, 30, 30) == pixel_at(canvas, 20, 30));
    CHECK(pixel_at(canvas, 20, 30) == 128);
    CHECK(pixel_at(canvas, 50, 30) == 128);
}

TEST_CASE("a closed polyline meets itself") {
    Canvas canvas(60, 60);
    canvas.polyline(std::vector<Vec2>{{10, 10}, {50, 10}, {50, 50}, {10, 50}},
                    {.colour = black, .width = 4, .cap = Cap::butt, .dashes = {}}, true);
    for (const Vec2& middle : {Vec2{30, 10}, Vec2{50, 30}, Vec2{30, 50}, Vec2{10, 30}})
        CHECK(pixel_at(canvas, middle.x(), middle.y()) == 0);
    Canvas ring(60, 60);
    ring.circle({30, 30}, 20, {.colour = black, .width = 3, .dashes = {}});
    CHECK(ink_area(ring) == doctest::Approx(2 * pi * 20 * 3).epsilon(0.005));
}

TEST_CASE("nothing is drawn outside the clip or the page") {
    Canvas canvas(40, 40);
    canvas.clip(PageBox{10, 12, 30, 28});
    canvas.fill_disc({20, 20}, 200, black);
    CHECK(ink_area(canvas) == 20 * 16);
    canvas.clip(std::nullopt);
    canvas.fill_disc({-500, 20}, 400, black);
    canvas.line({-1e6, -1e6}, {-1e5, 1e6}, {.colour = black, .dashes = {}});
    CHECK(ink_area(canvas) == 20 * 16);
    canvas.fill_box({-1e7, -1e7, 1e7, 1e7}, black);
    CHECK(ink_area(canvas) == 40 * 40);
}

TEST_CASE("a page or a pen that cannot be is refused") {
    CHECK_THROWS_AS(Canvas(0, 10), Error);
    CHECK_THROWS_AS(Canvas(10, 1e6), Error);
    CHECK_THROWS_AS(Canvas(10, std::nan("")), Error);
    Canvas canvas(10, 10);
    CHECK_THROWS_AS(canvas.line({0, 0}, {5, 5}, {.dashes = {1, 0}}), Error);
}
