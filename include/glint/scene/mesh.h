// Triangle meshes, and reading them from OBJ files.
#pragma once

#include <glint/core/vector.h>

#include <array>
#include <filesystem>
#include <vector>

namespace glint {

/// Triangles over shared vertices [m]. Triangles that share an edge share its two vertex numbers, or at least
/// bitwise equal vertices; no ray passes between them then.
struct Mesh {
    std::vector<Vec3> vertices;
    std::vector<std::array<int, 3>> triangles;  ///< vertex numbers from 0
};

/// Reads the polygons of a Wavefront OBJ file; polygons of more than three corners are cut into triangles.
/// Coordinates are taken as metres. Names, groups, materials, texture and normal data are passed over.
/// Errors, with file and line, all of them up to a limit: a missing file; no triangles; coordinates that are
/// no finite numbers; vertex numbers that do not exist; faces of fewer than three corners; statements that
/// are not OBJ, or describe curved surfaces; a polygon that cannot be cut.
[[nodiscard]] Mesh read_obj(const std::filesystem::path& path);

/// Every vertex v becomes linear * v + offset. `linear` may scale and mirror; both must be finite.
[[nodiscard]] Mesh transformed(const Mesh& mesh, const Mat3& linear, const Vec3& offset);

}  // namespace glint
