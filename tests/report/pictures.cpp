// Pictures: PNG read back, and that figures show the data they were given where they say.
#include "report/png_reader.h"

#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/report/plots.h>

#include <doctest/doctest.h>
#include <omp.h>
#include <algorithm>
#include <cmath>
#include <limits>

using namespace glint;

namespace {

const double nan_value = std::nan("");

Colour at(const Canvas& canvas, const Vec2& place) {
    const auto column = static_cast<std::size_t>(place.x() * canvas.density()),
               row = static_cast<std::size_t>(place.y() * canvas.density());
    const std::uint8_t* part =
        &canvas.pixels()[(row * static_cast<std::size_t>(canvas.pixel_width()) + column) * 3];
    return rgb8(part[0], part[1], part[2]);
}

/// Same to the byte.
bool same(const Colour& a, const Colour& b) {
    return std::max({std::abs(a.red - b.red), std::abs(a.green - b.green), std::abs(a.blue - b.blue)}) <
           0.6 / 255;
}

int count_of(const Canvas& canvas, const Colour& colour) {
    int count = 0;
    for (std::size_t i = 0; i < canvas.pixels().size(); i += 3)
        count += same(rgb8(canvas.pixels()[i], canvas.pixels()[i + 1], canvas.pixels()[i + 2]), colour);
    return count;
}

HeatMap small_map() {
    HeatMap map{.rows = 2, .columns = 3, .values = {1, 2, 3, 4, nan_value, 6}};
    map.horizontal = {.label = "u", .unit = "m", .range = {0, 3}};
    map.vertical = {.label = "v", .unit = "m", .range = {0, 2}};
    map.colours = {.label = "w"};
    return map;
}

/// The plot area of a heat map, found again from its parts.
PageBox plot_of(const HeatMap& map) {
    FrameContent content{.heading = map.heading,
                         .horizontal = map.horizontal,
                         .vertical = map.vertical,
                         .colours = settle(map.colours, map.values)};
    content.legend.push_back({.name = map.no_data, .colour = {}, .sign = LegendEntry::Sign::hatch});
    return lay_out({0, 0, map.size.width, map.size.height}, content).plot;
}

}  // namespace

TEST_CASE("a PNG reads back to the pixels that were drawn") {
    Canvas canvas(61.5, 40);
    RandomStream random(51);
    for (int row = 0; row < canvas.pixel_height(); ++row)
        for (int column = 0; column < canvas.pixel_width(); ++column)
            canvas.pixel(column, row,
                         {.red = random.uniform(), .green = random.uniform(), .blue = random.uniform()});
    const ReadPicture picture = read_png(png(canvas));
    CHECK(picture.width == 123);
    CHECK(picture.height == 80);
    CHECK(std::equal(picture.pixels.begin(), picture.pixels.end(), canvas.pixels().begin(),
                     canvas.pixels().end()));
}

TEST_CASE("every figure has the size that was asked for, at its density") {
    const Canvas map = draw(small_map());
    const ReadPicture picture = read_png(png(map));
    CHECK(picture.width == 1800);
    CHECK(picture.height == 1280);
    const Canvas points = draw(PointView{});
    CHECK(points.pixel_width() == 2560);
    CHECK(points.pixel_height() == 1600);
    LinePlot plot;
    plot.curves.push_back({.points = {{0, 0}, {1, 1}}});
    plot.size.density = 1;
    CHECK(draw(plot).pixel_width() == 900);
}

TEST_CASE("a heat map shows row 0 at the top, each cell in its colour, and hatches what is missing") {
    const HeatMap map = small_map();
    const Canvas canvas = draw(map);
    const PageBox plot = plot_of(map);
    const auto cell = [&](double row, double column) {
        return at(canvas, {plot.left + plot.width() * (column + 0.4) / 3,
                           plot.top + plot.height() * (row + 0.4) / 2});
    };
    CHECK(same(cell(0, 0), sequential_colour(0)));
    CHECK(same(cell(0, 1), sequential_colour(0.2)));
    CHECK(same(cell(0, 2), sequential_colour(0.4)));
    CHECK(same(cell(1, 0), sequential_colour(0.6)));
    CHECK(same(cell(1, 2), sequential_colour(1)));
    CHECK(count_of(canvas, palette::no_data) > 50000);
    const auto named = [](const Canvas& c) {
        return std::any_of(c.labels().begin(), c.labels().end(),
                           [](const Label& label) { return label.text == "no data"; });
    };
    CHECK(named(canvas));
    HeatMap whole = map;
    whole.values[4] = 5;
    CHECK_FALSE(named(draw(whole)));
    CHECK(count_of(draw(whole), palette::no_data) == 0);
}

TEST_CASE("no seam shows between the cells of a heat map") {
    HeatMap map = small_map();
    map.rows = 37, map.columns = 53;
    map.values.assign(37 * 53, 2.0);
    map.colours.range = AxisRange{0, 4};
    map.no_data = "";
    const Canvas canvas = draw(map);
    // The plot is one block of one colour: as many pixels as its border leaves.
    FrameContent content{
        .horizontal = map.horizontal, .vertical = map.vertical, .colours = settle(map.colours, map.values)};
    const PageBox plot = lay_out({0, 0, map.size.width, map.size.height}, content).plot;
    CHECK(count_of(canvas, sequential_colour(0.5)) >= (plot.width() * 2 - 2) * (plot.height() * 2 - 2));
}

TEST_CASE("values beyond a given range point out of the colour bar") {
    HeatMap map = small_map();
    const int before = count_of(draw(map), sequential_colour(1));
    map.colours.range = AxisRange{1, 5};
    const Canvas canvas = draw(map);
    const FrameContent content{
        .horizontal = map.horizontal,
        .vertical = map.vertical,
        .colours = settle(map.colours, map.values),
        .legend = {{.name = map.no_data, .colour = {}, .sign = LegendEntry::Sign::hatch}}};
    const Frame frame = lay_out({0, 0, map.size.width, map.size.height}, content);
    CHECK(frame.colour_bar.top > frame.plot.top);
    CHECK(frame.colour_bar.bottom == frame.plot.bottom);
    CHECK(same(at(canvas, {frame.colour_bar.centre().x(), frame.colour_bar.top - 3}), sequential_colour(1)));
    CHECK(before > 0);
}

TEST_CASE("an outline goes round its cells and not between them") {
    HeatMap map = small_map();
    map.values.assign(6, 1.0);
    map.groups.push_back({.cells = {0, 1}, .name = "", .colour = rgb8(255, 0, 0)});
    const Canvas canvas = draw(map);
    const FrameContent content{
        .horizontal = map.horizontal, .vertical = map.vertical, .colours = settle(map.colours, map.values)};
    const PageBox plot = lay_out({0, 0, map.size.width, map.size.height}, content).plot;
    const double third = plot.width() / 3, half = plot.height() / 2;
    CHECK(same(at(canvas, {plot.left + 2 * third, plot.top + half / 2}), rgb8(255, 0, 0)));
    CHECK(same(at(canvas, {plot.left + third / 2, plot.top + half}), rgb8(255, 0, 0)));
    CHECK_FALSE(same(at(canvas, {plot.left + third, plot.top + half / 2}), rgb8(255, 0, 0)));
}

TEST_CASE("a zone map puts positive angles right and up, and numbers only where they fit") {
    ZoneMap map{.zones = {{.polygons = {rectangle({10, 5}, {5, 4})}, .value = 1, .number = "7"},
                          {.polygons = {rectangle({-10, -5}, {5, 4})},
                           .value = 2,
                           .number = "123456789012345678901234567890123456789012345678901234567890"},
                          {.polygons = {rectangle({0, 0}, {0.1, 4})}, .value = 1, .number = "88"}},
                .outlines = {}};
    map.colours = {.label = "w"};
    const Canvas canvas = draw(map);
    FrameContent content{.horizontal = map.horizontal,
                         .vertical = map.vertical,
                         .colours = settle(map.colours, std::vector<double>{1, 2}),
                         .aspect = 1};
    content.horizontal->range = {-15 - 1.2, 15 + 1.2};
    content.vertical->range = {-9 - 0.72, 9 + 0.72};
    const Frame frame = fit_page(map.size, content).frame;
    CHECK(same(at(canvas, frame.place({14, 8})), sequential_colour(0)));
    CHECK(same(at(canvas, frame.place({-14, -8})), sequential_colour(1)));
    CHECK(same(at(canvas, frame.place({-13.3, 7.3})), palette::background));
    const auto number = std::find_if(canvas.labels().begin(), canvas.labels().end(),
                                     [](const Label& label) { return label.text == "7"; });
    REQUIRE(number != canvas.labels().end());
    CHECK((number->box.centre() - frame.place({10, 5})).norm() < 4);
    CHECK(std::none_of(canvas.labels().begin(), canvas.labels().end(),
                       [](const Label& label) { return label.text.size() > 40 || label.text == "88"; }));
}

TEST_CASE("a curve passes through its points and breaks at NaN") {
    LinePlot plot;
    plot.curves.push_back(
        {.points = {{1, 1}, {10, 10}, {nan_value, 1}, {100, 100}, {1000, 1000}}, .colour = rgb8(255, 0, 0)});
    plot.horizontal.spacing = plot.vertical.spacing = Spacing::logarithmic;
    plot.horizontal.range = plot.vertical.range = {0.5, 2000};
    plot.fit_horizontal = plot.fit_vertical = false;
    const Canvas canvas = draw(plot);
    const Frame frame = lay_out({0, 0, plot.size.width, plot.size.height},
                                {.horizontal = plot.horizontal, .vertical = plot.vertical});
    CHECK(same(at(canvas, frame.place({3, 3})), rgb8(255, 0, 0)));
    CHECK(same(at(canvas, frame.place({300, 300})), rgb8(255, 0, 0)));
    CHECK_FALSE(same(at(canvas, frame.place({30, 30})), rgb8(255, 0, 0)));
}

TEST_CASE("figures that cannot be drawn are refused") {
    const double infinity = std::numeric_limits<double>::infinity();
    HeatMap map = small_map();
    map.values.pop_back();
    CHECK_THROWS_AS(static_cast<void>(draw(map)), Error);
    map = small_map();
    map.values[0] = infinity;
    CHECK_THROWS_AS(static_cast<void>(draw(map)), Error);
    map = small_map();
    map.groups.push_back({.cells = {6}, .name = ""});
    CHECK_THROWS_AS(static_cast<void>(draw(map)), Error);
    CHECK_THROWS_AS(static_cast<void>(draw(HeatMap{})), Error);
    CHECK_THROWS_AS(
        static_cast<void>(draw(ZoneMap{.zones = {{.polygons = {{{0, 0}, {1, 1}}}}}, .outlines = {}})), Error);
    CHECK_THROWS_AS(static_cast<void>(draw(
                        ZoneMap{.zones = {{.polygons = {{{0, 0}, {1, 1}, {infinity, 0}}}}}, .outlines = {}})),
                    Error);
    CHECK_THROWS_AS(static_cast<void>(draw(LinePlot{})), Error);
    LinePlot plot;
    plot.curves.push_back({.points = {{0, 1}, {1, 1}}});
    plot.horizontal.spacing = Spacing::logarithmic;
    CHECK_THROWS_AS(static_cast<void>(draw(plot)), Error);
    CHECK_THROWS_AS(static_cast<void>(draw(PointView{.marks = {{.position = {0, nan_value, 0}}}})), Error);
    CHECK_THROWS_AS(static_cast<void>(draw(PointView{.marks = {{.value = infinity}}})), Error);
}

TEST_CASE("the number of threads changes no byte") {
    RandomStream random(52);
    PointView view;
    for (int i = 0; i < 4000; ++i) {
        const double x = 1 + 4 * random.uniform(), y = 3 * random.uniform() - 1.5;
        view.marks.push_back(
            {.position = {x, y, i % 3 == 0 ? -1 : 0.4 * std::sin(3 * x) * std::cos(2 * y)}, .value = x});
    }
    view.size.density = 1;
    const int before = omp_get_max_threads();
    omp_set_num_threads(1);
    const std::string alone = png(draw(view));
    for (const int threads : {2, 3, 7}) {
        omp_set_num_threads(threads);
        CHECK(png(draw(view)) == alone);
    }
    omp_set_num_threads(before);
}
