// Moving meshes.
#include <glint/scene/mesh.h>

namespace glint {

Mesh transformed(const Mesh& mesh, const Mat3& linear, const Vec3& offset) {
    Mesh result = mesh;
    for (Vec3& vertex : result.vertices) vertex = linear * vertex + offset;
    return result;
}

}  // namespace glint
