// Angular kernels: how the power of one beam spreads over direction around its axis.
//
// All kernels live in the tangent plane of the axis: p = tan of the angle to the right, q = up. The solid
// angle of dp dq is dp dq / (1 + p^2 + q^2)^(3/2), so a kernel given per dp dq is what a flat screen facing
// the beam shows.
#pragma once

#include <glint/core/vector.h>
#include <glint/design/design.h>

namespace glint {

enum class KernelShape {
    gaussian,   ///< elliptical Gaussian over the tangent plane
    ring,       ///< Gaussian wall around a cone, over the tangent plane
    rectangle,  ///< I ~ cos^-n inside a rectangle of the tangent plane, soft edges
    round,      ///< I ~ cos^-n inside a circle of the tangent plane, soft edge
};

/// A kernel of total power 1. Which members count depends on the shape.
struct Kernel {
    KernelShape shape = KernelShape::gaussian;
    double a = 0;  ///< gaussian: 1/e2 half width along p; ring: crest radius; fields: half width along p
    double b = 0;  ///< gaussian: 1/e2 half width along q; ring: 1/e2 half width of the wall; fields: along q
    double edge = 0;      ///< fields: 1/e2 half width of the Gaussian that softens the edge
    double exponent = 0;  ///< fields: n of cos^-n
    double scale = 0;  ///< gaussian, ring: density at the crest [per dp dq]; fields: intensity on axis [1/sr]
    double reach = 0;  ///< radius in the tangent plane beyond which the kernel is zero
};

[[nodiscard]] Kernel gaussian_kernel(double a, double b);
[[nodiscard]] Kernel ring_kernel(double crest, double wall);

/// Field of a diffuser [tangent half widths], edges softened by a Gaussian of 1/e2 half width `edge`.
/// I(theta) = I0 cos^-n(theta) inside; the integral is done numerically once, to 1e-6.
[[nodiscard]] Kernel rectangle_kernel(double half_p, double half_q, double edge, double exponent);
[[nodiscard]] Kernel round_kernel(double radius, double edge, double exponent);

/// Radiant intensity per power [1/sr] in the direction of tangent coordinates (p, q). Zero beyond the reach.
[[nodiscard]] double intensity(const Kernel& kernel, double p, double q);

/// A point (p, q) of the kernel from a point of the unit square: equal areas of the square carry equal power
/// for gaussian and ring. Field kernels are sampled evenly over their reach; `weight` makes up for it (mean
/// 1).
struct KernelSample {
    Vec2 tangent;
    double weight = 1;
};
[[nodiscard]] KernelSample sample(const Kernel& kernel, const Vec2& unit_square);

/// The kernel of a bare emitter. Gaussian: irradiance on a flat screen falls to 1/e2 at the half angle.
/// Widths by `lobe.width`: full and half 1/e2 angle, or full angle at half maximum (0.58871 of the 1/e2 one
/// in the tangent).
[[nodiscard]] Kernel lobe_kernel(const Lobe& lobe);

/// 1/e2 half width of the Gaussian that has the same second moment as a gaussian or ring kernel.
[[nodiscard]] double equivalent_half_width(const Kernel& kernel);

/// Power of a gaussian or ring kernel within tangent radius r of its axis; 0 to 1.
[[nodiscard]] double power_within(const Kernel& kernel, double r);

/// 1/e2 half width of the finest structure of a kernel [tangent].
[[nodiscard]] double finest_width(const Kernel& kernel);

/// The same within tangent distance r of (p, q); infinite where the kernel is smooth or all but dark there.
[[nodiscard]] double finest_width_near(const Kernel& kernel, double p, double q, double r);

/// Share of a gaussian or ring kernel, leaving a point at distance `offset` from the axis of a lens and
/// `distance` before it, that passes the lens of radius `radius`. The integral of the kernel over the offset
/// disc: for a Gaussian 1 - Q1(2 offset/w, 2 radius/w), Q1 the Marcum function.
[[nodiscard]] double captured_share(const Kernel& kernel, double distance, double offset, double radius);

}  // namespace glint
