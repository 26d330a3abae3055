// Where a single ray meets a single shape.
#include <glint/scene/intersect.h>

#include <Eigen/Geometry>
#include <algorithm>
#include <cmath>
#include <utility>

namespace glint {
namespace {

// The part of a line inside a solid convex shape, and which face it enters and leaves by.
struct Chord {
    double enter = 0, leave = 0;  // enter > leave: the line misses
    int enter_face = 0, leave_face = 0;
};

constexpr Chord missed = {.enter = no_distance, .leave = -no_distance};

// Where a line lies between two parallel planes.
Chord between(double low, double high, double origin, double direction, int low_face, int high_face) {
    // A ray along the planes stays inside or outside for good; the planes themselves are inside.
    if (direction == 0) {
        const bool inside = low <= origin && origin <= high;
        return inside ? Chord{-no_distance, no_distance, low_face, high_face} : missed;
    }
    const double to_low = (low - origin) / direction, to_high = (high - origin) / direction;
    if (to_low <= to_high) return {to_low, to_high, low_face, high_face};
    return {to_high, to_low, high_face, low_face};
}

Chord both(const Chord& a, const Chord& b) {
    Chord result = a;
    if (b.enter > a.enter) result.enter = b.enter, result.enter_face = b.enter_face;
    if (b.leave < a.leave) result.leave = b.leave, result.leave_face = b.leave_face;
    return result;
}

double first_within(const Chord& chord, const Ray& ray) {
    if (!(chord.enter <= chord.leave)) return no_distance;
    const double distance = chord.enter > ray.near ? chord.enter : chord.leave;
    return distance > ray.near && distance <= ray.far ? distance : no_distance;
}

// Where |origin + t direction| <= radius, in as many dimensions as the vectors have. The discriminant is
// taken from the point of the line closest to the centre, so that a far start does not cancel it (Haines et
// al. 2019, Ray Tracing Gems, chapter 7).
Chord within_radius(const Vec3& origin, const Vec3& direction, double radius) {
    const double a = direction.squaredNorm();
    if (a == 0) {
        const bool inside = origin.squaredNorm() <= radius * radius;
        return inside ? Chord{.enter = -no_distance, .leave = no_distance} : missed;
    }
    const double b = origin.dot(direction);
    const Vec3 closest = origin - (b / a) * direction;
    const double rest = radius * radius - closest.squaredNorm();
    if (!(rest >= 0)) return missed;
    const double root = std::sqrt(a * rest);
    return {.enter = (-b - root) / a, .leave = (-b + root) / a};
}

Ray in_frame_of(const Box& box, const Ray& ray) {
    return {.origin = box.rotation.transpose() * (ray.origin - box.centre),
            .direction = box.rotation.transpose() * ray.direction,
            .near = ray.near,
            .far = ray.far};
}

// Faces are numbered 2 axis for the low side and 2 axis + 1 for the high side.
Chord chord_of(const Box& box, const Ray& local) {
    Chord chord = {.enter = -no_distance, .leave = no_distance};
    for (int k = 0; k < 3; ++k) {
        const double reach = box.half_size[k];
        chord = both(chord, between(-reach, reach, local.origin[k], local.direction[k], 2 * k, 2 * k + 1));
    }
    return chord;
}

// A ray split into its part along the axis of a cylinder and its part across, from the centre of the base.
struct AxialRay {
    double start = 0, slope = 0;  // along the axis
    Vec3 origin, direction;       // across it
};

AxialRay in_frame_of(const Cylinder& cylinder, const Ray& ray) {
    const Vec3 origin = ray.origin - cylinder.base;
    const double start = origin.dot(cylinder.axis), slope = ray.direction.dot(cylinder.axis);
    return {.start = start,
            .slope = slope,
            .origin = origin - start * cylinder.axis,
            .direction = ray.direction - slope * cylinder.axis};
}

// Faces: 0 the side, 1 the cap at the base, 2 the other cap.
Chord chord_of(const Cylinder& cylinder, const AxialRay& ray) {
    return both(within_radius(ray.origin, ray.direction, cylinder.radius),
                between(0, cylinder.length, ray.start, ray.slope, 1, 2));
}

SurfacePoint facing(const Vec3& point, const Vec3& normal, const Ray& ray) {
    return {.point = point, .normal = normal.dot(ray.direction) > 0 ? Vec3(-normal) : normal};
}

}  // namespace

double distance_to(const Plane& plane, const Ray& ray) {
    const double distance = (plane.point - ray.origin).dot(plane.normal) / ray.direction.dot(plane.normal);
    // A ray along the plane gives infinity, or NaN when it starts in it; both fail here.
    return distance > ray.near && distance <= ray.far && distance < no_distance ? distance : no_distance;
}

double distance_to(const Box& box, const Ray& ray) {
    return first_within(chord_of(box, in_frame_of(box, ray)), ray);
}

double distance_to(const Sphere& sphere, const Ray& ray) {
    return first_within(within_radius(ray.origin - sphere.centre, ray.direction, sphere.radius), ray);
}

double distance_to(const Cylinder& cylinder, const Ray& ray) {
    return first_within(chord_of(cylinder, in_frame_of(cylinder, ray)), ray);
}

SurfacePoint surface_at(const Plane& plane, const Ray& ray, double distance) {
    const Vec3 point = ray.origin + distance * ray.direction;
    return facing(point - (point - plane.point).dot(plane.normal) * plane.normal, plane.normal, ray);
}

SurfacePoint surface_at(const Box& box, const Ray& ray, double distance) {
    const Ray local = in_frame_of(box, ray);
    const Chord chord = chord_of(box, local);
    const int face = distance == chord.enter ? chord.enter_face : chord.leave_face;
    const int axis = face / 2;
    Vec3 point = (local.origin + distance * local.direction).cwiseMax(-box.half_size).cwiseMin(box.half_size);
    point[axis] = face % 2 == 0 ? -box.half_size[axis] : box.half_size[axis];
    return facing(box.centre + box.rotation * point, box.rotation.col(axis), ray);
}

SurfacePoint surface_at(const Sphere& sphere, const Ray& ray, double distance) {
    const Vec3 normal = (ray.origin + distance * ray.direction - sphere.centre).normalized();
    return facing(sphere.centre + sphere.radius * normal, normal, ray);
}

SurfacePoint surface_at(const Cylinder& cylinder, const Ray& ray, double distance) {
    const AxialRay axial = in_frame_of(cylinder, ray);
    const Chord chord = chord_of(cylinder, axial);
    const int face = distance == chord.enter ? chord.enter_face : chord.leave_face;
    const Vec3 across = axial.origin + distance * axial.direction;
    if (face == 0) {
        const Vec3 normal = across.normalized();
        const double along = std::clamp(axial.start + distance * axial.slope, 0.0, cylinder.length);
        return facing(cylinder.base + along * cylinder.axis + cylinder.radius * normal, normal, ray);
    }
    const double along = face == 1 ? 0 : cylinder.length;
    return facing(cylinder.base + along * cylinder.axis + across, cylinder.axis, ray);
}

SurfacePoint surface_at(const Triangle& triangle, const Ray& ray) {
    const TriangleCrossing at = crossing(triangle, sheared(ray));
    const Vec3 point = at.wa * triangle.a + at.wb * triangle.b + at.wc * triangle.c;
    const Vec3 area = (triangle.b - triangle.a).cross(triangle.c - triangle.a);
    const double length = area.norm();
    if (!(length > 0)) return {.point = point, .normal = -ray.direction};
    return facing(point, area / length, ray);
}

}  // namespace glint
