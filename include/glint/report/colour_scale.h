// How values become colours.
#pragma once

#include <glint/report/axes.h>
#include <glint/report/colours.h>

#include <optional>
#include <span>
#include <string>

namespace glint {

enum class ColourPath { sequential, diverging };

/// A scale of colours. Values past an end of a given range take the end's colour, and the bar shows that.
struct ColourScale {
    std::string label;
    std::string unit;                ///< may be empty
    std::optional<AxisRange> range;  ///< none: the smallest and largest value shown
    Spacing spacing = Spacing::linear;
    ColourPath path = ColourPath::sequential;
    double centre = 0;      ///< diverging: value of the neutral colour; the range is widened to be symmetric
    bool reversed = false;  ///< high values take the low end's colour
};

/// A scale made ready for the values it shows.
struct SettledScale {
    Axis axis;
    ColourPath path = ColourPath::sequential;
    bool reversed = false;
    bool below = false, above = false;  ///< some value lies past that end

    /// Colour of a share of the way along the bar.
    [[nodiscard]] Colour at(double share) const;
    /// Colour of a value; NaN gives palette::no_data.
    [[nodiscard]] Colour of(double value) const;
};

/// Settles the range: given, or that of the values (NaN left out); symmetric when diverging, opened up when
/// all are equal, 0 to 1 (1 to 10 when logarithmic) when there is none. Error for an infinite value, an empty
/// range, a value or bound <= 0 on a logarithmic scale, or a logarithmic diverging scale.
[[nodiscard]] SettledScale settle(const ColourScale& scale, std::span<const double> values);

}  // namespace glint
