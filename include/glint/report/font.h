// Letters: widths and outlines of text in the embedded font.
#pragma once

#include <glint/core/vector.h>

#include <string>
#include <string_view>
#include <vector>

namespace glint {

enum class Weight { regular, semibold };

/// Closed outlines of a text, y down, the pen starting at (0, 0) on the baseline. Outer rings and holes run
/// in opposite directions.
struct TextOutline {
    std::vector<std::vector<Vec2>> rings;
    double width = 0;  ///< advance of the pen
};

/// Advance width of UTF-8 `text`, kerned, in the units of `size` (height of the em). Raised and lowered
/// digits and arrows that the font lacks are made from what it has; any other unknown character shows as a
/// box.
[[nodiscard]] double text_width(std::string_view text, double size, Weight weight = Weight::regular);

/// Outlines of `text`; curves are divided until they are within `tolerance` of the true curve.
[[nodiscard]] TextOutline text_outline(std::string_view text, double size, Weight weight, double tolerance);

/// Heights of a font above (positive) and below (positive) the baseline, in the units of `size`.
struct FontHeights {
    double capital = 0;  ///< top of capitals
    double ascent = 0;   ///< top of the tallest letters
    double descent = 0;  ///< depth of the deepest letters
    double line = 0;     ///< baseline to baseline
};
[[nodiscard]] FontHeights font_heights(double size);

/// `text` broken at blanks into lines no wider than `width`; a word that is wider is broken inside. At least
/// one line.
[[nodiscard]] std::vector<std::string> wrap_text(std::string_view text, double width, double size,
                                                 Weight weight);

}  // namespace glint
