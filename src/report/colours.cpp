// Colours: sRGB and OKLab, the two scales, contrast.
#include <glint/core/error.h>
#include <glint/report/colours.h>

#include <algorithm>
#include <cmath>

namespace glint {

namespace {

double share_of_scale(double t) {
    if (std::isnan(t))
        throw Error(Problem{.what = "a colour was asked for NaN", .accepted = "a share from 0 to 1"});
    return std::clamp(t, 0.0, 1.0);
}

double luminance(const Colour& colour) {
    return 0.2126 * linear_light(colour.red) + 0.7152 * linear_light(colour.green) +
           0.0722 * linear_light(colour.blue);
}

Oklab along(const Oklab& from, const Oklab& to, double share) {
    return {.lightness = from.lightness + (to.lightness - from.lightness) * share,
            .a = from.a + (to.a - from.a) * share,
            .b = from.b + (to.b - from.b) * share};
}

}  // namespace

double linear_light(double encoded) {
    return encoded <= 0.04045 ? encoded / 12.92 : std::pow((encoded + 0.055) / 1.055, 2.4);
}

double encoded_light(double linear) {
    return linear <= 0.0031308 ? linear * 12.92 : 1.055 * std::pow(linear, 1 / 2.4) - 0.055;
}

Oklab to_oklab(const Colour& colour) {
    const double red = linear_light(colour.red), green = linear_light(colour.green),
                 blue = linear_light(colour.blue);
    const double l = std::cbrt(0.4122214708 * red + 0.5363325363 * green + 0.0514459929 * blue);
    const double m = std::cbrt(0.2119034982 * red + 0.6806995451 * green + 0.1073969566 * blue);
    const double s = std::cbrt(0.0883024619 * red + 0.2817188376 * green + 0.6299787005 * blue);
    return {.lightness = 0.2104542553 * l + 0.7936177850 * m - 0.0040720468 * s,
            .a = 1.9779984951 * l - 2.4285922050 * m + 0.4505937099 * s,
            .b = 0.0259040371 * l + 0.7827717662 * m - 0.8086757660 * s};
}

Colour from_oklab(const Oklab& lab) {
    const double l_root = lab.lightness + 0.3963377774 * lab.a + 0.2158037573 * lab.b;
    const double m_root = lab.lightness - 0.1055613458 * lab.a - 0.0638541728 * lab.b;
    const double s_root = lab.lightness - 0.0894841775 * lab.a - 1.2914855480 * lab.b;
    const double l = l_root * l_root * l_root, m = m_root * m_root * m_root, s = s_root * s_root * s_root;
    const auto part = [](double linear) { return encoded_light(std::clamp(linear, 0.0, 1.0)); };
    return {.red = part(4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s),
            .green = part(-1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s),
            .blue = part(-0.0041960863 * l - 0.7034186147 * m + 1.7076147010 * s)};
}

double distance(const Oklab& p, const Oklab& q) {
    return std::hypot(p.lightness - q.lightness, p.a - q.a, p.b - q.b);
}

Colour mix(const Colour& from, const Colour& to, double share) {
    return from_oklab(along(to_oklab(from), to_oklab(to), share));
}

Colour sequential_colour(double t) {
    // From wine through violet and azure to pale straw. The circle in the a-b plane was placed as wide as the
    // sRGB solid allows at every lightness on the way, so no colour is cut and the steps stay even.
    constexpr double darkest = 0.30, lightest = 0.90, centre_a = 0.020, centre_b = -0.055, radius = 0.11;
    constexpr double start = 0.8, sweep = -5.0;
    const double share = share_of_scale(t), angle = start + sweep * share;
    return from_oklab({.lightness = darkest + (lightest - darkest) * share,
                       .a = centre_a + radius * std::cos(angle),
                       .b = centre_b + radius * std::sin(angle)});
}

Colour diverging_colour(double t) {
    // Both ends have the same lightness and the same distance from neutral.
    constexpr Oklab neutral{.lightness = 0.95, .a = 0, .b = 0};
    constexpr Oklab blue{.lightness = 0.53, .a = -0.0385, .b = -0.1435};
    constexpr Oklab orange{.lightness = 0.53, .a = 0.1050, .b = 0.1050};
    const double share = share_of_scale(t);
    return from_oklab(share < 0.5 ? along(neutral, blue, 1 - 2 * share)
                                  : along(neutral, orange, 2 * share - 1));
}

double contrast(const Colour& p, const Colour& q) {
    const auto [darker, lighter] = std::minmax({luminance(p), luminance(q)});
    return (lighter + 0.05) / (darker + 0.05);
}

Colour ink_on(const Colour& ground) {
    constexpr Colour black = rgb8(0, 0, 0), white = rgb8(255, 255, 255);
    return contrast(black, ground) > contrast(white, ground) ? black : white;
}

}  // namespace glint
