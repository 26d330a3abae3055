// Scene files: named objects made of shapes, in XML.
#pragma once

#include <glint/design/record.h>
#include <glint/scene/scene.h>
#include <filesystem>
#include <string>
#include <variant>
#include <vector>

namespace glint {

/// Reflectance of a material at one wavelength, as written.
struct ReflectanceEntry {
    double wavelength = 0;  ///< [m]
    double reflectance = 0;
};

/// A material as written: one reflectance, or a table over wavelength.
struct MaterialEntry {
    std::string name;
    std::optional<double> reflectance;
    std::vector<ReflectanceEntry> table;
};

/// Shapes as written, each in the frame of its object [m, rad].
struct BoxEntry {
    double x = 0, y = 0, z = 0;                 ///< centre
    double size_x = 0, size_y = 0, size_z = 0;  ///< full sizes
    double turn = 0;                            ///< about the vertical, counter-clockwise seen from above
    double tilt = 0;                            ///< then nose up about its own left axis
};
struct SphereEntry {
    double x = 0, y = 0, z = 0;
    double radius = 0;
};
struct CylinderEntry {
    double x = 0, y = 0, z = 0;           ///< middle of one end
    double to_x = 0, to_y = 0, to_z = 0;  ///< middle of the other
    double radius = 0;
};
struct PlaneEntry {
    double x = 0, y = 0, z = 0;                       ///< a point of it
    double normal_x = 0, normal_y = 0, normal_z = 1;  ///< any length above 0
};
enum class UpAxis { z, y };
struct MeshEntry {
    std::string file;       ///< OBJ
    UpAxis up = UpAxis::z;  ///< axis of the file that points up
    double scale = 1;       ///< metres per unit of the file
    double x = 0, y = 0, z = 0;
    double turn = 0;
};
using ShapeEntry = std::variant<BoxEntry, SphereEntry, CylinderEntry, PlaneEntry, MeshEntry>;

/// A named object as written: its shapes, placed once or in a row of copies.
struct ObjectEntry {
    std::string name;
    std::string material;
    double x = 0, y = 0, z = 0;
    double turn = 0;
    int copies = 1;
    double step_x = 0, step_y = 0, step_z = 0;  ///< from copy to copy
    std::vector<ShapeEntry> shapes;
};

/// A whole scene file as written.
struct SceneFile {
    std::string name;
    std::string note;
    std::vector<std::variant<MaterialEntry, ObjectEntry>> entries;
};

/// The record of SceneFile: each field once.
[[nodiscard]] const Record& scene_record();

/// Reads a scene file and the meshes it names (relative to it) and builds the scene. Throws Error with all
/// problems, file and line.
[[nodiscard]] Scene load_scene(const std::filesystem::path& file);

}  // namespace glint
