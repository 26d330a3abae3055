// Colours: conversions, evenness of the scales, and telling colours apart with deficient colour vision.
#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/report/colour_scale.h>
#include <glint/report/colours.h>

#include <doctest/doctest.h>
#include <algorithm>
#include <array>
#include <cmath>
#include <functional>
#include <limits>
#include <vector>

using namespace glint;

namespace {

using Matrix = std::array<std::array<double, 3>, 3>;

// Machado, Oliveira, Fernandes 2009, severity 1.0, on linear light; from memory.
constexpr Matrix protanopia{
    {{0.152286, 1.052583, -0.204868}, {0.114503, 0.786281, 0.099216}, {-0.003882, -0.048116, 1.051998}}};
constexpr Matrix deuteranopia{
    {{0.367322, 0.860646, -0.227968}, {0.280085, 0.672501, 0.047413}, {-0.011820, 0.042940, 0.968881}}};

Colour seen_with(const Matrix& deficiency, const Colour& colour) {
    const std::array<double, 3> light{linear_light(colour.red), linear_light(colour.green),
                                      linear_light(colour.blue)};
    const auto part = [&](int row) {
        const double sum =
            deficiency[row][0] * light[0] + deficiency[row][1] * light[1] + deficiency[row][2] * light[2];
        return encoded_light(std::clamp(sum, 0.0, 1.0));
    };
    return {.red = part(0), .green = part(1), .blue = part(2)};
}

/// What a picture stores.
Colour in_bytes(const Colour& colour) {
    const auto part = [](double value) { return std::round(255 * value) / 255; };
    return {.red = part(colour.red), .green = part(colour.green), .blue = part(colour.blue)};
}

double closest_pair(const std::vector<Colour>& colours, const std::function<Colour(const Colour&)>& seen) {
    double closest = 1e9;
    for (std::size_t i = 0; i < colours.size(); ++i)
        for (std::size_t j = 0; j < i; ++j)
            closest = std::min(closest, distance(to_oklab(seen(colours[i])), to_oklab(seen(colours[j]))));
    return closest;
}

std::vector<Colour> steps_of(Colour (*scale)(double), int count) {
    std::vector<Colour> colours;
    for (int i = 0; i < count; ++i) colours.push_back(scale(static_cast<double>(i) / (count - 1)));
    return colours;
}

}  // namespace

TEST_CASE("sRGB transfer: published points, and both ways give back the part") {
    // IEC 61966-2-1, from memory: the straight part ends at 0.04045 / 12.92; half of full code is 21.4 % of
    // light.
    CHECK(linear_light(0.04045) == doctest::Approx(0.0031308).epsilon(1e-4));
    CHECK(linear_light(0.5) == doctest::Approx(0.2140).epsilon(1e-3));
    for (int i = 0; i <= 1000; ++i)
        CHECK(encoded_light(linear_light(i / 1000.0)) == doctest::Approx(i / 1000.0).epsilon(1e-5));
}

TEST_CASE("OKLab agrees with the way through CIE XYZ") {
    // Ottosson 2020: XYZ (D65) to cone response; IEC 61966-2-1: linear sRGB to XYZ. Both from memory, four to
    // ten digits, so that the two ways agree to about 1e-3.
    constexpr Matrix xyz_of_rgb{
        {{0.4124, 0.3576, 0.1805}, {0.2126, 0.7152, 0.0722}, {0.0193, 0.1192, 0.9505}}};
    constexpr Matrix cones_of_xyz{{{0.8189330101, 0.3618667424, -0.1288597137},
                                   {0.0329845436, 0.9293118715, 0.0361456387},
                                   {0.0482003018, 0.2643662691, 0.6338517070}}};
    const auto apply = [](const Matrix& m, const std::array<double, 3>& v) {
        std::array<double, 3> out{};
        for (int r = 0; r < 3; ++r)
            for (int c = 0; c < 3; ++c) out[r] += m[r][c] * v[c];
        return out;
    };
    RandomStream random(1);
    for (int i = 0; i < 500; ++i) {
        const Colour colour{.red = random.uniform(), .green = random.uniform(), .blue = random.uniform()};
        std::array<double, 3> cones =
            apply(cones_of_xyz, apply(xyz_of_rgb, {linear_light(colour.red), linear_light(colour.green),
                                                   linear_light(colour.blue)}));
        for (double& cone : cones) cone = std::cbrt(cone);
        const Oklab lab = to_oklab(colour);
        const double lightness = 0.2104542553 * cones[0] + 0.7936177850 * cones[1] - 0.0040720468 * cones[2];
        CHECK(std::abs(lab.lightness - lightness) < 1e-3);
        CHECK(std::abs(lab.a -
                       (1.9779984951 * cones[0] - 2.4285922050 * cones[1] + 0.4505937099 * cones[2])) < 1e-3);
        CHECK(std::abs(lab.b -
                       (0.0259040371 * cones[0] + 0.7827717662 * cones[1] - 0.8086757660 * cones[2])) < 1e-3);
        // The two published matrices are inverse to each other to about eight digits of linear light.
        const Colour back = from_oklab(lab);
        CHECK(std::abs(back.red - colour.red) < 1e-5);
        CHECK(std::abs(back.green - colour.green) < 1e-5);
        CHECK(std::abs(back.blue - colour.blue) < 1e-5);
    }
    // Ottosson 2020: white is (1, 0, 0).
    CHECK(distance(to_oklab(rgb8(255, 255, 255)), {.lightness = 1, .a = 0, .b = 0}) < 1e-6);
}

TEST_CASE("the sequential scale is even: equal steps of colour, lightness always rising") {
    const std::vector<Colour> colours = steps_of(sequential_colour, 257);
    double shortest = 1e9, longest = 0;
    for (std::size_t i = 1; i < colours.size(); ++i) {
        const Oklab before = to_oklab(colours[i - 1]), after = to_oklab(colours[i]);
        const double step = distance(before, after);
        shortest = std::min(shortest, step), longest = std::max(longest, step);
        CHECK(after.lightness - before.lightness > 0.9 * (0.60 / 256));
    }
    // A helix with nothing cut off at the sides of sRGB has steps equal to rounding.
    CHECK(longest < 1.001 * shortest);
    // In the bytes of a picture, in as many steps as its lightness has room for, and in grey.
    for (std::size_t i = 4; i < colours.size(); i += 4) {
        CHECK(to_oklab(in_bytes(colours[i])).lightness > to_oklab(in_bytes(colours[i - 4])).lightness);
        CHECK(contrast(colours[i], rgb8(0, 0, 0)) > contrast(colours[i - 4], rgb8(0, 0, 0)));
    }
}

TEST_CASE("sixteen steps of the sequential scale stay apart with deficient colour vision") {
    const std::vector<Colour> colours = steps_of(sequential_colour, 16);
    CHECK(closest_pair(colours, [](const Colour& c) { return in_bytes(c); }) > 0.050);
    CHECK(closest_pair(colours, [](const Colour& c) { return seen_with(deuteranopia, c); }) > 0.035);
    CHECK(closest_pair(colours, [](const Colour& c) { return seen_with(protanopia, c); }) > 0.030);
    for (const Matrix& deficiency : {deuteranopia, protanopia})
        for (std::size_t i = 1; i < colours.size(); ++i)
            CHECK(to_oklab(seen_with(deficiency, colours[i])).lightness >
                  to_oklab(seen_with(deficiency, colours[i - 1])).lightness);
}

TEST_CASE("the diverging scale is neutral in the middle, symmetric in lightness, and keeps its sides apart") {
    const Oklab neutral = to_oklab(diverging_colour(0.5));
    CHECK(std::hypot(neutral.a, neutral.b) < 1e-4);
    const std::vector<Colour> colours = steps_of(diverging_colour, 101);
    double shortest = 1e9, longest = 0;
    for (std::size_t i = 0; i < 50; ++i) {
        const Oklab low = to_oklab(colours[i]), high = to_oklab(colours[100 - i]);
        CHECK(low.lightness == doctest::Approx(high.lightness).epsilon(1e-6));
        CHECK(to_oklab(colours[i + 1]).lightness > low.lightness);
        for (const double step :
             {distance(low, to_oklab(colours[i + 1])), distance(high, to_oklab(colours[99 - i]))})
            shortest = std::min(shortest, step), longest = std::max(longest, step);
    }
    CHECK(longest < 1.001 * shortest);
    const std::vector<Colour> eleven = steps_of(diverging_colour, 11);
    CHECK(closest_pair(eleven, [](const Colour& c) { return seen_with(deuteranopia, c); }) > 0.045);
    CHECK(closest_pair(eleven, [](const Colour& c) { return seen_with(protanopia, c); }) > 0.045);
}

TEST_CASE("the categories stay apart with deficient colour vision and stand out from the page") {
    const std::vector<Colour> colours(palette::categories.begin(), palette::categories.end());
    CHECK(closest_pair(colours, [](const Colour& c) { return c; }) > 0.19);
    CHECK(closest_pair(colours, [](const Colour& c) { return seen_with(deuteranopia, c); }) > 0.12);
    CHECK(closest_pair(colours, [](const Colour& c) { return seen_with(protanopia, c); }) > 0.12);
    for (const Colour& colour : colours) CHECK(contrast(colour, palette::background) > 3);
    // WCAG 2.1: 4.5 for text. Its formula: black on white is 21.
    CHECK(contrast(palette::ink, palette::background) > 12);
    CHECK(contrast(palette::quiet_ink, palette::background) > 4.5);
    CHECK(contrast(rgb8(0, 0, 0), rgb8(255, 255, 255)) == doctest::Approx(21));
    for (int i = 0; i <= 100; ++i)
        CHECK(contrast(ink_on(sequential_colour(i / 100.0)), sequential_colour(i / 100.0)) > 4.5);
}

TEST_CASE("scales take the end's colour beyond their ends and refuse NaN") {
    CHECK(sequential_colour(-1) == sequential_colour(0));
    CHECK(sequential_colour(2) == sequential_colour(1));
    CHECK_THROWS_AS(static_cast<void>(sequential_colour(std::nan(""))), Error);
    CHECK_THROWS_AS(static_cast<void>(diverging_colour(std::nan(""))), Error);
}

TEST_CASE("a settled scale covers its values") {
    const double nan = std::nan("");
    const std::vector<double> values{3, nan, 7, 5};
    const SettledScale scale = settle({.label = "x"}, values);
    CHECK(scale.axis.range.low == 3);
    CHECK(scale.axis.range.high == 7);
    CHECK(scale.of(3) == sequential_colour(0));
    CHECK(scale.of(7) == sequential_colour(1));
    CHECK(scale.of(nan) == palette::no_data);
    CHECK(settle({.reversed = true}, values).of(3) == sequential_colour(1));

    const SettledScale given = settle({.range = AxisRange{4, 6}}, values);
    CHECK(given.below);
    CHECK(given.above);
    CHECK(given.of(3) == sequential_colour(0));
    CHECK_FALSE(settle({.range = AxisRange{3, 7}}, values).above);

    const SettledScale both = settle({.path = ColourPath::diverging, .centre = 4}, values);
    CHECK(both.axis.range.low == 1);
    CHECK(both.axis.range.high == 7);
    CHECK(both.of(4) == diverging_colour(0.5));

    const SettledScale decades = settle({.spacing = Spacing::logarithmic}, std::vector<double>{1, 100});
    CHECK(decades.of(10) == sequential_colour(0.5));

    CHECK(settle({}, std::vector<double>{5, 5}).axis.range.low < 5);
    CHECK(settle({}, std::vector<double>{nan}).axis.range.high == 1);
    CHECK(settle({.spacing = Spacing::logarithmic}, {}).axis.range.high == 10);
}

TEST_CASE("a scale that cannot be drawn is refused") {
    const auto refused = [](const ColourScale& scale, const std::vector<double>& values) {
        CHECK_THROWS_AS(static_cast<void>(settle(scale, values)), Error);
    };
    refused({}, {1, std::numeric_limits<double>::infinity()});
    refused({.spacing = Spacing::logarithmic}, {1, 0});
    refused({.range = AxisRange{2, 2}}, {1});
    refused({.range = AxisRange{3, 2}}, {1});
    refused({.range = AxisRange{-1, 2}, .spacing = Spacing::logarithmic}, {1});
    refused({.range = AxisRange{0, std::nan("")}}, {1});
    refused({.spacing = Spacing::logarithmic, .path = ColourPath::diverging}, {1});
}
