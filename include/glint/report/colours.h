// The colours of every picture: page, ink, a categorical set and two even scales, all chosen in OKLab.
#pragma once

#include <array>

namespace glint {

/// A colour as sRGB-encoded parts in [0, 1]; alpha 1 covers, 0 leaves what is beneath.
struct Colour {
    double red = 0, green = 0, blue = 0;
    double alpha = 1;

    bool operator==(const Colour&) const = default;
};

/// A colour in OKLab (Ottosson 2020): lightness 0 black to 1 white, a red against green, b yellow against
/// blue.
struct Oklab {
    double lightness = 0, a = 0, b = 0;
};

/// sRGB transfer function, one part (IEC 61966-2-1): encoded [0, 1] to linear light [0, 1], and back.
[[nodiscard]] double linear_light(double encoded);
[[nodiscard]] double encoded_light(double linear);

/// Conversion by the two matrices and the cube root of Ottosson (2020); alpha is not looked at.
[[nodiscard]] Oklab to_oklab(const Colour&);

/// The inverse. Parts outside sRGB are cut to [0, 1]; alpha is 1.
[[nodiscard]] Colour from_oklab(const Oklab&);

/// Euclidean distance in OKLab; about 0.02 is the least difference seen side by side.
[[nodiscard]] double distance(const Oklab&, const Oklab&);

/// `share` 0 gives `from`, 1 gives `to`; in between along the straight line in OKLab.
[[nodiscard]] Colour mix(const Colour& from, const Colour& to, double share);

/// The same colour with another alpha.
[[nodiscard]] constexpr Colour with_alpha(Colour colour, double alpha) {
    colour.alpha = alpha;
    return colour;
}

/// Colour of a share `t` in [0, 1], dark (0) to light (1): a helix in OKLab about a tilted grey axis, so that
/// equal steps of t are equal steps of colour and lightness rises by the same amount each. t outside [0, 1]
/// takes the end; NaN throws Error.
[[nodiscard]] Colour sequential_colour(double t);

/// Colour of a share `t` in [0, 1]: blue (0), neutral (0.5), orange (1), along two straight lines in OKLab.
/// t outside [0, 1] takes the end; NaN throws Error.
[[nodiscard]] Colour diverging_colour(double t);

/// Black or white ink, whichever reads better on `ground` (larger contrast ratio, WCAG 2.1).
[[nodiscard]] Colour ink_on(const Colour& ground);

/// Contrast ratio of two opaque colours, 1 to 21 (WCAG 2.1).
[[nodiscard]] double contrast(const Colour&, const Colour&);

/// A colour from 8-bit parts, e.g. rgb8(34, 41, 52).
[[nodiscard]] constexpr Colour rgb8(int red, int green, int blue) {
    return {.red = red / 255.0, .green = green / 255.0, .blue = blue / 255.0};
}

namespace palette {

inline constexpr Colour background = rgb8(255, 255, 255);
inline constexpr Colour ink = rgb8(32, 38, 46);              ///< titles, axes, numbers
inline constexpr Colour quiet_ink = rgb8(92, 101, 112);      ///< subtitles, notes
inline constexpr Colour grid = rgb8(224, 228, 233);          ///< grid lines
inline constexpr Colour no_data = rgb8(236, 238, 241);       ///< ground of cells without a value
inline constexpr Colour no_data_line = rgb8(190, 196, 204);  ///< hatch of cells without a value

/// Eight colours for curves and groups, told apart with deuteranopia and protanopia too; use them in this
/// order. Each has a contrast of at least 3 on the page.
inline constexpr std::array<Colour, 8> categories = {
    rgb8(27, 32, 147),    // blue
    rgb8(169, 56, 17),    // rust
    rgb8(55, 146, 253),   // azure
    rgb8(162, 140, 10),   // ochre
    rgb8(123, 71, 191),   // violet
    rgb8(27, 98, 110),    // teal
    rgb8(222, 107, 161),  // pink
    rgb8(78, 39, 11),     // brown
};

}  // namespace palette

}  // namespace glint
