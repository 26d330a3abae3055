// Pictures as PNG bytes.
#include <glint/core/error.h>
#include <glint/report/png.h>

#include <stb/stb_image_write.h>

namespace glint {

std::string png(const Canvas& canvas) {
    std::string bytes;
    const auto append = [](void* target, void* data, int size) {
        static_cast<std::string*>(target)->append(static_cast<const char*>(data),
                                                  static_cast<std::size_t>(size));
    };
    const int width = canvas.pixel_width(), height = canvas.pixel_height();
    if (stbi_write_png_to_func(append, &bytes, width, height, 3, canvas.pixels().data(), 3 * width) == 0)
        throw Error(Problem{.what = "out of memory while writing a picture"}, Blame::machine);
    return bytes;
}

}  // namespace glint
