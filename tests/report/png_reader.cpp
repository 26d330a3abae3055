// The image decoder of stb, compiled for the tests only.
#include "report/png_reader.h"

#define STB_IMAGE_IMPLEMENTATION
#define STBI_ONLY_PNG
#include <stb/stb_image.h>

ReadPicture read_png(const std::string& bytes) {
    ReadPicture picture;
    int parts = 0;
    unsigned char* pixels =
        stbi_load_from_memory(reinterpret_cast<const unsigned char*>(bytes.data()),
                              static_cast<int>(bytes.size()), &picture.width, &picture.height, &parts, 3);
    if (pixels == nullptr) return picture;
    picture.pixels.assign(pixels, pixels + static_cast<std::size_t>(picture.width) * picture.height * 3);
    stbi_image_free(pixels);
    return picture;
}
