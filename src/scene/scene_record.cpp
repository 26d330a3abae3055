// The one description of every field of a scene file.
#include <glint/core/constants.h>
#include <glint/scene/scene_file.h>

namespace glint {
namespace {

constexpr Range place = from_to(-1e5, 1e5);
constexpr Range size = above_to(0, 1e5);
constexpr Range any_angle = from_to(-2 * pi, 2 * pi);

// The fields x, y, z that almost every element has.
template <class Entry>
Describe<Entry>& placed(Describe<Entry>& describe, const char* what) {
    return describe.quantity("x", &Entry::x, Kind::length, place, std::string(what) + ", forward")
        .quantity("y", &Entry::y, Kind::length, place, std::string(what) + ", left")
        .quantity("z", &Entry::z, Kind::length, place, std::string(what) + ", up");
}

Record material() {
    return Describe<MaterialEntry>("material", "A diffuse surface")
        .text("name", &MaterialEntry::name, "Name, for objects to refer to")
        .required()
        .quantity("reflectance", &MaterialEntry::reflectance, Kind::ratio, from_to(0, 1),
                  "Reflectance at every wavelength; or give a table of <at>")
        .sequence(&MaterialEntry::table, Describe<ReflectanceEntry>("at", "Reflectance at one wavelength")
                                             .quantity("wavelength", &ReflectanceEntry::wavelength,
                                                       Kind::length, from_to(300e-9, 3e-6), "Wavelength")
                                             .required()
                                             .quantity("reflectance", &ReflectanceEntry::reflectance,
                                                       Kind::ratio, from_to(0, 1), "Reflectance")
                                             .required()
                                             .done())
        .done();
}

Record box() {
    Describe<BoxEntry> describe("box", "A box");
    return placed(describe, "Centre")
        .quantity("size_x", &BoxEntry::size_x, Kind::length, size, "Full size, forward")
        .required()
        .quantity("size_y", &BoxEntry::size_y, Kind::length, size, "Full size, left")
        .required()
        .quantity("size_z", &BoxEntry::size_z, Kind::length, size, "Full size, up")
        .required()
        .quantity("turn", &BoxEntry::turn, Kind::angle, any_angle, "Turned counter-clockwise seen from above")
        .quantity("tilt", &BoxEntry::tilt, Kind::angle, any_angle, "Its forward end tipped up")
        .done();
}

Record sphere() {
    Describe<SphereEntry> describe("sphere", "A ball");
    return placed(describe, "Centre")
        .quantity("radius", &SphereEntry::radius, Kind::length, size, "Radius")
        .required()
        .done();
}

Record cylinder() {
    Describe<CylinderEntry> describe("cylinder", "A solid round rod between two points");
    return placed(describe, "Middle of one end")
        .quantity("to_x", &CylinderEntry::to_x, Kind::length, place, "Middle of the other end, forward")
        .required()
        .quantity("to_y", &CylinderEntry::to_y, Kind::length, place, "Middle of the other end, left")
        .required()
        .quantity("to_z", &CylinderEntry::to_z, Kind::length, place, "Middle of the other end, up")
        .required()
        .quantity("radius", &CylinderEntry::radius, Kind::length, size, "Radius")
        .required()
        .done();
}

Record plane() {
    Describe<PlaneEntry> describe("plane", "An infinite plane");
    constexpr Range component = from_to(-1e6, 1e6);
    return placed(describe, "A point of it")
        .quantity("normal_x", &PlaneEntry::normal_x, Kind::number, component, "Normal, forward")
        .quantity("normal_y", &PlaneEntry::normal_y, Kind::number, component, "Normal, left")
        .quantity("normal_z", &PlaneEntry::normal_z, Kind::number, component, "Normal, up")
        .done();
}

Record mesh() {
    Describe<MeshEntry> describe("mesh", "A triangle mesh from an OBJ file");
    return placed(describe, "Place of the file's origin")
        .file("file", &MeshEntry::file, "OBJ file")
        .required()
        .choice("up", &MeshEntry::up, {"z", "y"}, "Axis of the file that points up")
        .quantity("scale", &MeshEntry::scale, Kind::number, above_to(0, 1e6), "Metres per unit of the file")
        .quantity("turn", &MeshEntry::turn, Kind::angle, any_angle,
                  "Turned counter-clockwise seen from above")
        .done();
}

Record object() {
    Describe<ObjectEntry> describe("object",
                                   "A named thing made of shapes, placed once or in a row of copies");
    return placed(describe, "Place of the object's origin")
        .text("name", &ObjectEntry::name, "Name, for requirements and tables to refer to")
        .required()
        .text("material", &ObjectEntry::material, "Name of its material")
        .required()
        .quantity("turn", &ObjectEntry::turn, Kind::angle, any_angle,
                  "Turned counter-clockwise seen from above")
        .integer("copies", &ObjectEntry::copies, from_to(1, 10000), "How many in a row")
        .quantity("step_x", &ObjectEntry::step_x, Kind::length, place, "From copy to copy, forward")
        .quantity("step_y", &ObjectEntry::step_y, Kind::length, place, "From copy to copy, left")
        .quantity("step_z", &ObjectEntry::step_z, Kind::length, place, "From copy to copy, up")
        .sequence(&ObjectEntry::shapes, {box(), sphere(), cylinder(), plane(), mesh()})
        .done();
}

}  // namespace

const Record& scene_record() {
    static const Record record =
        Describe<SceneFile>("scene", "Materials and named objects; x forward, y left, z up")
            .text("name", &SceneFile::name, "Name of the scene")
            .text("note", &SceneFile::note, "Remark")
            .sequence(&SceneFile::entries, {material(), object()})
            .done();
    return record;
}

}  // namespace glint
