// Points as a PLY file.
#include <glint/report/ply.h>

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <bit>
#include <cstdint>
#include <cstring>

namespace glint {
namespace {

void append(std::string& bytes, std::uint32_t word) {
    for (int shift = 0; shift < 32; shift += 8) bytes += static_cast<char>(word >> shift & 0xFF);
}
void append(std::string& bytes, double value) {
    append(bytes, std::bit_cast<std::uint32_t>(static_cast<float>(value)));
}
void append(std::string& bytes, int value) { append(bytes, static_cast<std::uint32_t>(value)); }

// A header line must not hold a line break.
std::string one_line(std::string text) {
    std::ranges::replace_if(
        text, [](char c) { return c == '\n' || c == '\r'; }, ' ');
    return text;
}

}  // namespace

std::string points_ply(std::span<const Point> points, std::span<const std::string> object_names) {
    std::string bytes = "ply\nformat binary_little_endian 1.0\n";
    bytes += "comment modelled points of an early design, not measured ones; x forward, y left, z up\n";
    bytes += "comment units: x y z range precision metre, signal counts\n";
    for (std::size_t i = 0; i < object_names.size(); ++i)
        bytes += fmt::format("comment object {} {}\n", i, one_line(object_names[i]));
    bytes += fmt::format("element vertex {}\n", points.size());
    for (const char* name : {"x", "y", "z", "range", "signal", "precision", "probability"})
        bytes += fmt::format("property float {}\n", name);
    for (const char* name : {"zone", "column", "row", "object"})
        bytes += fmt::format("property int {}\n", name);
    bytes += "end_header\n";
    bytes.reserve(bytes.size() + points.size() * 44);
    for (const Point& point : points) {
        for (const double value : {point.position.x(), point.position.y(), point.position.z(), point.range,
                                   point.signal, point.precision, point.probability})
            append(bytes, value);
        for (const int value : {point.zone, point.column, point.row, point.object}) append(bytes, value);
    }
    return bytes;
}

}  // namespace glint
