// The module's pose: between its own frame and the scene's.
#include <glint/optics/pose.h>

namespace glint {

Pose module_pose(const Placement& placement) {
    const Mat3 rotation = (Eigen::AngleAxisd(-placement.heading, Vec3::UnitZ()) *
                           Eigen::AngleAxisd(-placement.elevation, Vec3::UnitY()) *
                           Eigen::AngleAxisd(placement.roll, Vec3::UnitX()))
                              .toRotationMatrix();
    return {rotation, Vec3(placement.x, placement.y, placement.z)};
}

}  // namespace glint
