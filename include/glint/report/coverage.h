// Exact area coverage of pixels by polygons.
#pragma once

#include <glint/core/vector.h>

#include <span>
#include <vector>

namespace glint {

/// A window of pixels: columns left..right-1, rows top..bottom-1.
struct PixelWindow {
    int left = 0, top = 0, right = 0, bottom = 0;

    [[nodiscard]] int width() const { return right > left ? right - left : 0; }
    [[nodiscard]] int height() const { return bottom > top ? bottom - top : 0; }
};

/// Share of every pixel of `window` that is covered, row by row, each in [0, 1].
struct Coverage {
    PixelWindow window;
    std::vector<float> share;
};

/// Area of each pixel of `window` inside the closed polygons `rings` [pixels, y down]: the signed area to the
/// right of every edge, summed along the row, magnitude cut at 1. Exact for polygons that do not cross
/// themselves; a ring inside another makes a hole when it runs the other way. The window is narrowed to the
/// polygons.
[[nodiscard]] Coverage cover(std::span<const std::vector<Vec2>> rings, const PixelWindow& window);

}  // namespace glint
