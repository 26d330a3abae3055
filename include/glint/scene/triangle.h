// The triangle, and the test of a ray against it that leaves no gaps.
#pragma once

#include <glint/core/vector.h>
#include <glint/scene/bounds.h>
#include <glint/scene/ray.h>

#include <cmath>
#include <limits>

namespace glint {

/// Three corners, metres; seen from both sides.
struct Triangle {
    Vec3 a = Vec3::Zero();
    Vec3 b = Vec3::Zero();
    Vec3 c = Vec3::Zero();
};

[[nodiscard]] Bounds bounds_of(const Triangle& triangle);

/// A ray made ready for triangles: the axes are permuted so that z is the longest part of the direction, and
/// x and y are sheared so that the ray runs along z (Woop, Benthin, Wald 2013, J. Comput. Graph. Tech. 2(1)).
struct ShearedRay {
    int x = 0, y = 1, z = 2;                          ///< which axis of space plays x, y and z
    double origin_x = 0, origin_y = 0, origin_z = 0;  ///< origin in the permuted axes, m
    double shear_x = 0, shear_y = 0, scale_z = 1;     ///< d_x / d_z, d_y / d_z, 1 / d_z
};

[[nodiscard]] inline ShearedRay sheared(const Ray& ray) {
    int z = 0;
    ray.direction.cwiseAbs().maxCoeff(&z);
    const int x = (z + 1) % 3, y = (z + 2) % 3;
    return {.x = x,
            .y = y,
            .z = z,
            .origin_x = ray.origin[x],
            .origin_y = ray.origin[y],
            .origin_z = ray.origin[z],
            .shear_x = ray.direction[x] / ray.direction[z],
            .shear_y = ray.direction[y] / ray.direction[z],
            .scale_z = 1 / ray.direction[z]};
}

/// Where the line of a ray crosses a triangle: point = wa a + wb b + wc c, the weights sum to 1.
struct TriangleCrossing {
    double distance = std::numeric_limits<double>::infinity();  ///< infinity: no crossing
    double wa = 0, wb = 0, wc = 0;
};

/// Tests the whole line; the caller compares the distance with near and far.
///
/// Why no ray slips through between triangles that share vertices: each vertex is sheared by the same
/// arithmetic in every triangle, so all triangles see one and the same planar picture, and a ray is the point
/// (0, 0) of it. The edge function p_x q_y - p_y q_x of two rounded products is exactly antisymmetric in its
/// two vertices, and as rounding keeps order its sign is the true one or zero. Zero counts as inside on both
/// sides. So the accepted part of the picture covers the true one: neither shared edges nor shared vertices
/// are missed. This needs products and difference rounded apart (no contraction to fused operations).
[[nodiscard]] inline TriangleCrossing crossing(const Triangle& triangle, const ShearedRay& ray) {
    const double az = triangle.a[ray.z] - ray.origin_z;
    const double bz = triangle.b[ray.z] - ray.origin_z;
    const double cz = triangle.c[ray.z] - ray.origin_z;
    const double ax = (triangle.a[ray.x] - ray.origin_x) - ray.shear_x * az;
    const double ay = (triangle.a[ray.y] - ray.origin_y) - ray.shear_y * az;
    const double bx = (triangle.b[ray.x] - ray.origin_x) - ray.shear_x * bz;
    const double by = (triangle.b[ray.y] - ray.origin_y) - ray.shear_y * bz;
    const double cx = (triangle.c[ray.x] - ray.origin_x) - ray.shear_x * cz;
    const double cy = (triangle.c[ray.y] - ray.origin_y) - ray.shear_y * cz;
    const double u = bx * cy - by * cx;
    const double v = cx * ay - cy * ax;
    const double w = ax * by - ay * bx;
    if ((u < 0 || v < 0 || w < 0) && (u > 0 || v > 0 || w > 0)) return {};
    const double sum = u + v + w;
    if (sum == 0) return {};  // edge-on: the triangles next to it cover the picture
    const double distance = ray.scale_z * (u * az + v * bz + w * cz) / sum;
    return {.distance = distance, .wa = u / sum, .wb = v / sum, .wc = w / sum};
}

}  // namespace glint
