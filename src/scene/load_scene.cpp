// A scene file into a scene.
#include <glint/core/files.h>
#include <glint/core/text.h>
#include <glint/design/record_file.h>
#include <glint/scene/scene_file.h>

#include <fmt/format.h>
#include <map>

namespace glint {
namespace {

Mat3 turned(double turn, double tilt = 0) {
    return (Eigen::AngleAxisd(turn, Vec3::UnitZ()) * Eigen::AngleAxisd(-tilt, Vec3::UnitY()))
        .toRotationMatrix();
}

// Rigid motion of one copy of an object.
struct Pose {
    Mat3 rotation;
    Vec3 place;
    [[nodiscard]] Vec3 operator()(double x, double y, double z) const {
        return rotation * Vec3(x, y, z) + place;
    }
};

class Builder {
public:
    Builder(std::filesystem::path folder, const Places& places)
        : folder_(std::move(folder)), places_(places) {}

    SceneParts parts;
    std::vector<Problem> problems;

    void add(const MaterialEntry& entry, const std::string& path) {
        Material material{.name = entry.name, .table = {}};
        if (entry.reflectance) material.table.push_back({550e-9, *entry.reflectance});
        for (const ReflectanceEntry& at : entry.table) {
            if (!material.table.empty() && at.wavelength <= material.table.back().wavelength &&
                !entry.reflectance)
                complain("the wavelengths do not rise", "a table from short to long wavelength", path);
            material.table.push_back({at.wavelength, at.reflectance});
        }
        if (entry.reflectance && !entry.table.empty())
            complain("a single reflectance and a table contradict each other", "one of the two",
                     path + "/reflectance");
        else if (material.table.empty())
            complain("the material has no reflectance", "reflectance=\"30 %\", or elements <at>", path);
        if (!materials_.emplace(entry.name, static_cast<int>(parts.materials.size())).second)
            complain(fmt::format("a second material '{}'", entry.name), "each name once", path + "/name");
        parts.materials.push_back(std::move(material));
    }

    void add(const ObjectEntry& entry, const std::string& path) {
        const auto found = materials_.find(entry.material);
        if (found == materials_.end()) {
            std::vector<std::string> known;
            for (const auto& [name, index] : materials_) known.push_back(name);
            complain(fmt::format("no material '{}' stands above", entry.material), join_or(known),
                     path + "/material");
            return;
        }
        if (entry.shapes.empty())
            complain("the object has no shape", "box, sphere, cylinder, plane or mesh", path);
        object_ = static_cast<int>(parts.objects.size());
        parts.objects.push_back({entry.name, found->second});
        for (int copy = 0; copy < entry.copies; ++copy) {
            const Vec3 step(entry.step_x, entry.step_y, entry.step_z);
            const Pose pose{turned(entry.turn), Vec3(entry.x, entry.y, entry.z) + copy * step};
            for (const ShapeEntry& shape : entry.shapes)
                std::visit([&](const auto& each) { place(each, pose, path); }, shape);
        }
    }

private:
    void complain(std::string what, std::string accepted, const std::string& path) {
        problems.push_back(
            places_.at({.what = std::move(what), .accepted = std::move(accepted), .path = path}));
    }

    void place(const BoxEntry& box, const Pose& pose, const std::string&) {
        parts.boxes.push_back({{.centre = pose(box.x, box.y, box.z),
                                .half_size = Vec3(box.size_x, box.size_y, box.size_z) / 2,
                                .rotation = pose.rotation * turned(box.turn, box.tilt)},
                               object_});
    }

    void place(const SphereEntry& sphere, const Pose& pose, const std::string&) {
        parts.spheres.push_back(
            {{.centre = pose(sphere.x, sphere.y, sphere.z), .radius = sphere.radius}, object_});
    }

    void place(const CylinderEntry& rod, const Pose& pose, const std::string& path) {
        const Vec3 base = pose(rod.x, rod.y, rod.z), along = pose(rod.to_x, rod.to_y, rod.to_z) - base;
        if (!(along.norm() > 0)) {
            complain("a cylinder of no length", "two different ends", path);
            return;
        }
        parts.cylinders.push_back(
            {{.base = base, .axis = along.normalized(), .length = along.norm(), .radius = rod.radius},
             object_});
    }

    void place(const PlaneEntry& plane, const Pose& pose, const std::string& path) {
        const Vec3 normal = pose.rotation * Vec3(plane.normal_x, plane.normal_y, plane.normal_z);
        if (!(normal.norm() > 0)) {
            complain("a plane without a normal", "a normal of any length above 0", path);
            return;
        }
        parts.planes.push_back(
            {{.point = pose(plane.x, plane.y, plane.z), .normal = normal.normalized()}, object_});
    }

    void place(const MeshEntry& entry, const Pose& pose, const std::string& path) {
        auto known = meshes_.find(entry.file);
        if (known == meshes_.end()) {
            Mesh mesh;
            try {
                mesh = read_obj(folder_ / entry.file);
            } catch (const Error& error) {
                if (error.blame() == Blame::machine) throw;
                complain(fmt::format("the mesh {} cannot be used", entry.file), "", path);
                problems.insert(problems.end(), error.problems().begin(), error.problems().end());
            }
            known = meshes_.emplace(entry.file, std::move(mesh)).first;
        }
        Mesh placed = known->second;
        Mat3 upright = Mat3::Identity();
        if (entry.up == UpAxis::y) upright << 1, 0, 0, 0, 0, -1, 0, 1, 0;  // y becomes z, z becomes -y
        const Mat3 rotation = pose.rotation * turned(entry.turn) * upright;
        const Vec3 origin = pose(entry.x, entry.y, entry.z);
        for (Vec3& vertex : placed.vertices) vertex = rotation * (entry.scale * vertex) + origin;
        if (!placed.triangles.empty()) parts.meshes.push_back({std::move(placed), object_});
    }

    std::filesystem::path folder_;
    const Places& places_;
    std::map<std::string, int> materials_;
    std::map<std::string, Mesh> meshes_;
    int object_ = 0;
};

}  // namespace

Scene load_scene(const std::filesystem::path& file) {
    constexpr std::size_t limit = 64u << 20;
    SceneFile scene;
    ReadReport report = read_record(scene_record(), &scene, read_file(file, limit), file.string());
    std::vector<Problem> problems = std::move(report.problems);
    if (report.places.given(""))
        for (Problem& problem : check_given(scene_record(), &scene, report.places))
            problems.push_back(std::move(problem));
    if (!problems.empty()) throw Error(std::move(problems));

    Builder builder(file.parent_path(), report.places);
    std::map<std::string, int> seen;
    for (const auto& entry : scene.entries) {
        const std::string kind = std::holds_alternative<MaterialEntry>(entry) ? "material" : "object";
        const int occurrence = ++seen[kind];
        const std::string path = occurrence > 1 ? fmt::format("{}[{}]", kind, occurrence) : kind;
        std::visit([&](const auto& each) { builder.add(each, path); }, entry);
    }
    if (!builder.problems.empty()) throw Error(std::move(builder.problems));
    if (builder.parts.objects.empty())
        throw Error(Problem{.what = "the scene holds no object",
                            .accepted = "at least one <object>",
                            .file = file.string(),
                            .line = 1});
    return build_scene(std::move(builder.parts));
}

}  // namespace glint
