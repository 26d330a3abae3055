// Layout: whatever the data and the words, texts stand on the page and clear of each other.
#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/report/plots.h>

#include <doctest/doctest.h>
#include <cmath>
#include <string>

using namespace glint;

namespace {

void check_texts(const Canvas& canvas) {
    const std::span<const Label> labels = canvas.labels();
    for (std::size_t i = 0; i < labels.size(); ++i) {
        CAPTURE(labels[i].text);
        CHECK(canvas.page().holds(labels[i].box));
        for (std::size_t j = 0; j < i; ++j)
            CHECK_MESSAGE(!labels[i].box.overlaps(labels[j].box), labels[j].text);
    }
}

std::string words(RandomStream& random, std::uint64_t most) {
    static const char* const stock[] = {
        "Range",  "of",        "each", "zone",       "irradiance", "at",           "99 %",       "detection",
        "10⁻⁹ J", "precision", "µm",   "Wavelength", "(nominal)",  "temperature,", "accessible", "emission"};
    std::string text;
    for (std::uint64_t n = random.below(most + 1); n > 0; --n)
        text += (text.empty() ? "" : " ") + std::string(stock[random.below(16)]);
    return text;
}

Heading heading(RandomStream& random) {
    return {.title = words(random, 14), .subtitle = words(random, 25), .note = words(random, 30)};
}

/// One pixel a unit: the layout does not look at the density.
PageSize size(RandomStream& random) {
    return {.width = 420 + 700 * random.uniform(), .height = 380 + 500 * random.uniform(), .density = 0.5};
}

AxisRange range(RandomStream& random) {
    const double low = (random.uniform() - 0.5) * std::pow(10, -8 + 14 * random.uniform());
    return {low, low + std::pow(10, -8 + 14 * random.uniform()) + std::abs(low) * 1e-3};
}

Axis axis(RandomStream& random) {
    const bool logarithmic = random.below(3) == 0;
    Axis result{
        .label = words(random, 9), .unit = random.below(2) == 0 ? "" : "W/m²", .range = range(random)};
    if (logarithmic) {
        result.spacing = Spacing::logarithmic;
        result.range = {std::pow(10, -9 + 8 * random.uniform()), std::pow(10, 8 * random.uniform())};
    } else if (random.below(4) == 0) {
        std::swap(result.range.low, result.range.high);
    }
    return result;
}

ColourScale scale(RandomStream& random) {
    ColourScale result{.label = words(random, 6), .unit = "mm"};
    if (random.below(3) == 0) result.range = AxisRange{0.3, 0.6};
    if (random.below(3) == 0)
        result.spacing = Spacing::logarithmic;
    else if (random.below(2) == 0)
        result.path = ColourPath::diverging;
    return result;
}

}  // namespace

TEST_CASE("texts of heat maps stand on the page and clear of each other") {
    RandomStream random(41);
    for (int i = 0; i < 150; ++i) {
        HeatMap map{.heading = heading(random),
                    .rows = 1 + random.below(6),
                    .columns = 1 + random.below(6),
                    .values = {},
                    .horizontal = axis(random),
                    .vertical = axis(random),
                    .colours = scale(random)};
        for (std::size_t k = 0; k < map.rows * map.columns; ++k)
            map.values.push_back(k % 5 == 4 ? std::nan("") : std::pow(10, -6 * random.uniform()));
        for (std::uint64_t k = random.below(5); k > 0; --k)
            map.groups.push_back({.cells = {0}, .name = words(random, 8)});
        map.size = size(random);
        check_texts(draw(map));
    }
}

TEST_CASE("texts of zone maps stand on the page and clear of each other") {
    RandomStream random(42);
    for (int i = 0; i < 80; ++i) {
        ZoneMap map{.heading = heading(random)};
        const double field = std::pow(10, -1 + 2.5 * random.uniform());
        for (std::uint64_t k = random.below(150) + 1; k > 0; --k)
            map.zones.push_back(
                {.polygons = {ellipse(field * r2_point(static_cast<std::uint32_t>(k), {0, 0}),
                                      field * Vec2{0.02 + 0.08 * random.uniform(), 0.05}, random.uniform())},
                 .value = std::pow(10, -6 * random.uniform()),
                 .number = std::to_string(k)});
        map.outlines.push_back(
            {.corners = rectangle({field / 2, field / 2}, {field, field / 3}), .name = words(random, 5)});
        map.colours = scale(random);
        map.size = size(random);
        const Canvas canvas = draw(map);
        check_texts(canvas);
        CHECK(canvas.width() <= map.size.width + 1);
        CHECK(canvas.height() <= map.size.height + 1);
    }
}

TEST_CASE("texts of line plots stand on the page and clear of each other") {
    RandomStream random(43);
    for (int i = 0; i < 200; ++i) {
        LinePlot plot{.heading = heading(random), .horizontal = axis(random), .vertical = axis(random)};
        const std::uint64_t curves = 1 + random.below(12);
        for (std::uint64_t k = 0; k < curves; ++k) {
            Curve curve{.name = "curve" + std::to_string(k) + " " + words(random, 3), .points = {}};
            for (int n = 0; n <= 20; ++n)
                curve.points.push_back({1e-3 * std::pow(10, 0.2 * n), std::pow(10, 2 * random.uniform())});
            plot.curves.push_back(curve);
        }
        for (std::uint64_t k = random.below(6); k > 0; --k)
            plot.references.push_back({.across = random.below(2) == 0 ? ReferenceLine::Across::horizontal
                                                                      : ReferenceLine::Across::vertical,
                                       .value = 1 + 10 * random.uniform(),
                                       .name = "line" + std::to_string(k) + " " + words(random, 6)});
        plot.naming = static_cast<LinePlot::Naming>(random.below(3));
        plot.size = size(random);
        const Canvas canvas = draw(plot);
        check_texts(canvas);
        // No name is lost: each stands somewhere, in one piece or broken over lines.
        std::string all;
        for (const Label& label : canvas.labels()) all += label.text + " ";
        for (const Curve& curve : plot.curves)
            CHECK_MESSAGE((curve.name.empty() ||
                           all.find(curve.name.substr(0, curve.name.find(' '))) != std::string::npos),
                          curve.name);
        for (const ReferenceLine& line : plot.references)
            CHECK_MESSAGE((line.name.empty() ||
                           all.find(line.name.substr(0, line.name.find(' '))) != std::string::npos),
                          line.name);
    }
}

TEST_CASE("texts of point views stand on the page and clear of each other") {
    RandomStream random(44);
    for (int i = 0; i < 40; ++i) {
        PointView view{.heading = heading(random)};
        const Vec3 extent = std::pow(10, -1 + 3 * random.uniform()) *
                            Vec3{1, 0.1 + random.uniform(), 0.05 + 0.5 * random.uniform()};
        for (std::uint64_t k = random.below(300); k > 0; --k)
            view.marks.push_back({.position = extent.cwiseProduct(
                                      Vec3{random.uniform(), random.uniform() - 0.5, random.uniform() - 0.5}),
                                  .value = 0.1 + random.uniform()});
        view.colours = scale(random);
        view.floor = static_cast<Floor>(i % 3);
        view.size = {
            .width = 600 + 700 * random.uniform(), .height = 500 + 400 * random.uniform(), .density = 0.5};
        const Canvas canvas = draw(view);
        check_texts(canvas);
        for (const char* wanted : {"sensor", "x", "y", "z"})
            CHECK_MESSAGE(std::any_of(canvas.labels().begin(), canvas.labels().end(),
                                      [&](const Label& label) { return label.text == wanted; }),
                          wanted);
    }
}

TEST_CASE("a frame places data where its ticks say") {
    RandomStream random(45);
    for (int i = 0; i < 300; ++i) {
        FrameContent content{
            .heading = heading(random), .horizontal = axis(random), .vertical = axis(random)};
        const Frame frame = lay_out({0, 0, 900, 640}, content);
        const AxisRange across = content.horizontal->range, up = content.vertical->range;
        CHECK((frame.place({across.low, up.low}) - Vec2{frame.plot.left, frame.plot.bottom}).norm() < 1e-6);
        CHECK((frame.place({across.high, up.high}) - Vec2{frame.plot.right, frame.plot.top}).norm() < 1e-6);
        for (const double value : frame.horizontal_ticks.values) {
            const double x = frame.place({value, up.low}).x();
            CHECK((x > frame.plot.left - 0.01 && x < frame.plot.right + 0.01));
        }
    }
    const Frame decades =
        lay_out({0, 0, 900, 640}, {.horizontal = Axis{.range = {1, 100}, .spacing = Spacing::logarithmic},
                                   .vertical = Axis{.range = {1, 0}}});
    CHECK(decades.place({10, 0.5}).x() == doctest::Approx((decades.plot.left + decades.plot.right) / 2));
    CHECK(decades.place({10, 0.25}).y() < decades.place({10, 0.1}).y() + 300);
    CHECK(decades.place({10, 1}).y() == doctest::Approx(decades.plot.bottom));
}

TEST_CASE("the numbers at the ends of an axis that stands alone stay on the page") {
    for (const AxisRange& range : {AxisRange{0, 100000}, AxisRange{100000, 0}, AxisRange{-90000, 90000}}) {
        const Frame frame = lay_out({0, 0, 900, 640}, {.horizontal = Axis{.label = "x", .range = range}});
        double left = 1e9, right = 0;
        for (const Frame::Text& text : frame.texts) {
            const PageBox box = text_box(text.at, text.text, text.style);
            left = std::min(left, box.left), right = std::max(right, box.right);
        }
        CHECK(left > 15);
        CHECK(right < 885);
    }
}

TEST_CASE("equal units are equal on the page, and no page is left empty") {
    RandomStream random(46);
    for (int i = 0; i < 200; ++i) {
        FrameContent content{
            .horizontal = Axis{.label = "a", .range = {-10 * random.uniform(), 1 + 10 * random.uniform()}},
            .vertical = Axis{.label = "b", .range = {0, 1 + 10 * random.uniform()}}};
        content.aspect = 1;
        content.colours = settle({.label = "c"}, {});
        const auto [page, frame] = fit_page({.width = 900, .height = 640}, content);
        const double across =
            frame.plot.width() / (content.horizontal->range.high - content.horizontal->range.low);
        const double up = frame.plot.height() / content.vertical->range.high;
        // Both sides of the plot are rounded to whole units.
        CHECK(across == doctest::Approx(up).epsilon(1.5 / std::min(frame.plot.width(), frame.plot.height())));
        CHECK(page.width <= 900);
        CHECK(page.height <= 640);
        CHECK((page.width > 895 || page.height > 635));
    }
}

TEST_CASE("a page too small for its picture, or a bad axis, is refused") {
    const FrameContent content{.horizontal = Axis{.label = "a"}, .vertical = Axis{.label = "b"}};
    CHECK_THROWS_AS(static_cast<void>(lay_out({0, 0, 60, 60}, content)), Error);
    for (const AxisRange& bad : {AxisRange{1, 1}, AxisRange{0, std::nan("")}})
        CHECK_THROWS_AS(static_cast<void>(lay_out({0, 0, 900, 640},
                                                  {.horizontal = Axis{.range = bad}, .vertical = Axis{}})),
                        Error);
    CHECK_THROWS_AS(
        static_cast<void>(lay_out(
            {0, 0, 900, 640},
            {.horizontal = Axis{.range = {0, 1}, .spacing = Spacing::logarithmic}, .vertical = Axis{}})),
        Error);
}
