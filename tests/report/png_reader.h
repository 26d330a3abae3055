// Reads PNG bytes back, by a decoder that shares no code with the writer.
#pragma once

#include <string>
#include <vector>

struct ReadPicture {
    int width = 0, height = 0;
    std::vector<unsigned char> pixels;  ///< red, green, blue, row by row; empty when the bytes are no picture
};

[[nodiscard]] ReadPicture read_png(const std::string& bytes);
