// Reading meshes from Wavefront OBJ files.
#include "obj_scan.h"

#include <glint/core/error.h>
#include <glint/core/files.h>
#include <glint/scene/mesh.h>
#include <glint/scene/polygon.h>

#include <tiny_obj_loader.h>
#include <sstream>
#include <string>

namespace glint {
namespace {

std::string numbers_of(std::span<const tinyobj::index_t> face) {
    std::string text;
    for (const tinyobj::index_t& corner : face)
        text += (text.empty() ? "" : " ") + std::to_string(corner.vertex_index + 1);
    return text.size() > 60 ? text.substr(0, 60) + "..." : text;
}

}  // namespace

Mesh read_obj(const std::filesystem::path& path) {
    std::string text = plain_lines(read_file(path));
    if (std::vector<Problem> problems = obj_problems(text, path); !problems.empty())
        throw Error(std::move(problems));
    const auto refuse = [&](std::string what, std::string accepted) {
        throw Error(
            {.what = std::move(what), .accepted = std::move(accepted), .path = {}, .file = path.string()});
    };

    tinyobj::attrib_t attributes;
    std::vector<tinyobj::shape_t> shapes;
    std::vector<tinyobj::material_t> materials;
    std::string warning, error;
    std::istringstream stream(std::move(text));
    // Not triangulated by the parser: it cuts a quadrilateral that is not convex along the shorter diagonal
    // even when that lies outside, and may drop corners of larger polygons without a word.
    constexpr bool triangulate = false, colours = false;
    if (!tinyobj::LoadObj(&attributes, &shapes, &materials, &warning, &error, &stream, nullptr, triangulate,
                          colours))
        refuse("cannot be read: " + error, "a Wavefront OBJ file");

    Mesh mesh;
    mesh.vertices.reserve(attributes.vertices.size() / 3);
    for (std::size_t i = 0; i + 2 < attributes.vertices.size(); i += 3)
        mesh.vertices.emplace_back(attributes.vertices[i], attributes.vertices[i + 1],
                                   attributes.vertices[i + 2]);
    std::vector<Vec3> corners;
    for (const tinyobj::shape_t& shape : shapes) {
        std::size_t first = 0;
        for (const std::size_t count : shape.mesh.num_face_vertices) {
            const std::span face = std::span(shape.mesh.indices).subspan(first, count);
            first += count;
            const auto vertex = [&](int corner) {
                return face[static_cast<std::size_t>(corner)].vertex_index;
            };
            if (count == 3) {
                mesh.triangles.push_back({vertex(0), vertex(1), vertex(2)});
                continue;
            }
            corners.clear();
            for (const tinyobj::index_t& corner : face)
                corners.push_back(mesh.vertices[static_cast<std::size_t>(corner.vertex_index)]);
            const std::vector<std::array<int, 3>> triangles = cut_polygon(corners);
            if (triangles.empty())
                refuse("the face of vertices " + numbers_of(face) + " has no area or crosses itself",
                       "a simple polygon");
            for (const auto& [a, b, c] : triangles)
                mesh.triangles.push_back({vertex(a), vertex(b), vertex(c)});
        }
    }
    return mesh;
}

}  // namespace glint
