// The module's pose: between its own frame and the scene's.
#pragma once

#include <glint/core/vector.h>
#include <glint/design/design.h>

namespace glint {

/// Rigid motion from the module's frame (x forward, y left, z up) to the scene's.
struct Pose {
    Mat3 rotation = Mat3::Identity();
    Vec3 position = Vec3::Zero();

    [[nodiscard]] Vec3 to_scene(const Vec3& point) const { return rotation * point + position; }
    [[nodiscard]] Vec3 to_module(const Vec3& point) const {
        return rotation.transpose() * (point - position);
    }
};

/// Heading turns to the right about the vertical, then elevation lifts the nose, then roll tips clockwise.
[[nodiscard]] Pose module_pose(const Placement& placement);

}  // namespace glint
