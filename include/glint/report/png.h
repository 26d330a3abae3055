// Pictures as PNG bytes.
#pragma once

#include <glint/report/canvas.h>

#include <string>

namespace glint {

/// The picture as the bytes of an 8-bit RGB PNG file. Same picture, same bytes.
[[nodiscard]] std::string png(const Canvas& canvas);

}  // namespace glint
