// Angular kernels: normalisation, intensity, sampling.
#include <glint/core/constants.h>
#include <glint/core/quadrature.h>
#include <glint/core/samples.h>
#include <glint/optics/kernel.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace glint {
namespace {

// Gaussians end at 3 times their 1/e2 half width: 1.5e-8 of the power lies beyond.
constexpr double gaussian_reach = 3;
// Soft edges end as far beyond the edge: 1e-9 of the intensity is left there.
constexpr double field_reach = 3;
// Width at half maximum over 1/e2 width of a Gaussian: sqrt(ln 2 / 2).
const double half_maximum = std::sqrt(std::log(2.0) / 2);

double soft_step(double x, double edge) {  // 1 well inside (x << 0), 0 well outside
    if (edge <= 0) return x < 0 ? 1.0 : (x > 0 ? 0.0 : 0.5);
    return 0.5 * std::erfc(std::sqrt(2.0) * x / edge);
}

double window(const Kernel& kernel, double p, double q) {
    if (kernel.shape == KernelShape::round) return soft_step(std::hypot(p, q) - kernel.a, kernel.edge);
    return soft_step(std::abs(p) - kernel.a, kernel.edge) * soft_step(std::abs(q) - kernel.b, kernel.edge);
}

// Pieces that meet at the edge, so that a hard edge is integrated exactly.
template <class F>
double integral_with_edge(double edge_at, double end, const F& f) {
    return integral(0, edge_at, 24, f) + (end > edge_at ? integral(edge_at, end, 12, f) : 0);
}

double field_power(const Kernel& kernel, double end_p, double end_q) {
    const double power = (kernel.exponent - 3) / 2;
    if (kernel.shape == KernelShape::round)
        return 2 * pi * integral_with_edge(kernel.a, end_p, [&](double t) {
                   return t * std::pow(1 + t * t, power) * window(kernel, t, 0);
               });
    return 4 * integral_with_edge(kernel.a, end_p, [&](double p) {
               return integral_with_edge(kernel.b, end_q, [&](double q) {
                   return std::pow(1 + p * p + q * q, power) * window(kernel, p, q);
               });
           });
}

// Integral of t exp(-2 ((t - crest) / wall)^2) from 0 to r.
double ring_moment(double crest, double wall, double r) {
    const double k = std::sqrt(2.0) / wall;
    const double low = -crest * k, high = (r - crest) * k;
    const double root_pi = std::sqrt(pi);
    return (std::exp(-low * low) - std::exp(-high * high)) / (2 * k * k) +
           crest * root_pi / (2 * k) * (std::erf(high) - std::erf(low));
}

}  // namespace

Kernel gaussian_kernel(double a, double b) {
    return {.shape = KernelShape::gaussian,
            .a = a,
            .b = b,
            .scale = 2 / (pi * a * b),
            .reach = gaussian_reach * std::max(a, b)};
}

Kernel ring_kernel(double crest, double wall) {
    const double end = crest + gaussian_reach * wall;
    return {.shape = KernelShape::ring,
            .a = crest,
            .b = wall,
            .scale = 1 / (2 * pi * ring_moment(crest, wall, end)),
            .reach = end};
}

Kernel rectangle_kernel(double half_p, double half_q, double edge, double exponent) {
    Kernel kernel{
        .shape = KernelShape::rectangle, .a = half_p, .b = half_q, .edge = edge, .exponent = exponent};
    const double end_p = half_p + field_reach * edge, end_q = half_q + field_reach * edge;
    kernel.reach = std::hypot(end_p, end_q);
    kernel.scale = 1 / field_power(kernel, end_p, end_q);
    return kernel;
}

Kernel round_kernel(double radius, double edge, double exponent) {
    Kernel kernel{.shape = KernelShape::round, .a = radius, .b = radius, .edge = edge, .exponent = exponent};
    kernel.reach = radius + field_reach * edge;
    kernel.scale = 1 / field_power(kernel, kernel.reach, kernel.reach);
    return kernel;
}

double intensity(const Kernel& kernel, double p, double q) {
    const double t2 = p * p + q * q;
    if (t2 > kernel.reach * kernel.reach) return 0;
    const double secant2 = 1 + t2;  // 1 / cos^2 of the angle to the axis
    switch (kernel.shape) {
        case KernelShape::gaussian: {
            const double x = p / kernel.a, y = q / kernel.b;
            return kernel.scale * std::exp(-2 * (x * x + y * y)) * secant2 * std::sqrt(secant2);
        }
        case KernelShape::ring: {
            const double x = (std::sqrt(t2) - kernel.a) / kernel.b;
            return kernel.scale * std::exp(-2 * x * x) * secant2 * std::sqrt(secant2);
        }
        case KernelShape::rectangle:
            if (std::abs(p) > kernel.a + field_reach * kernel.edge ||
                std::abs(q) > kernel.b + field_reach * kernel.edge)
                return 0;
            [[fallthrough]];
        case KernelShape::round:
            return kernel.scale * std::pow(secant2, kernel.exponent / 2) * window(kernel, p, q);
    }
    return 0;
}

KernelSample sample(const Kernel& kernel, const Vec2& unit_square) {
    switch (kernel.shape) {
        case KernelShape::gaussian:
            return {square_to_gaussian(unit_square).cwiseProduct(Vec2(kernel.a, kernel.b)), 1};
        case KernelShape::ring: {
            // Radius by bisection of the power within; smooth and monotone.
            double low = 0, high = kernel.reach;
            for (int i = 0; i < 50; ++i) {
                const double middle = (low + high) / 2;
                (power_within(kernel, middle) < unit_square.x() ? low : high) = middle;
            }
            const double angle = 2 * pi * unit_square.y();
            return {low * Vec2(std::cos(angle), std::sin(angle)), 1};
        }
        case KernelShape::rectangle: {
            const Vec2 end(kernel.a + field_reach * kernel.edge, kernel.b + field_reach * kernel.edge);
            const Vec2 tangent = (2 * unit_square - Vec2::Ones()).cwiseProduct(end);
            const double solid_angle = 4 * end.x() * end.y() * std::pow(1 + tangent.squaredNorm(), -1.5);
            return {tangent, intensity(kernel, tangent.x(), tangent.y()) * solid_angle};
        }
        case KernelShape::round: {
            const Vec2 tangent = kernel.reach * square_to_disc(unit_square);
            const double solid_angle =
                pi * kernel.reach * kernel.reach * std::pow(1 + tangent.squaredNorm(), -1.5);
            return {tangent, intensity(kernel, tangent.x(), tangent.y()) * solid_angle};
        }
    }
    return {};
}

Kernel lobe_kernel(const Lobe& lobe) {
    const double half = lobe.width == BeamWidth::half_1e2 ? lobe.divergence : lobe.divergence / 2;
    const double width = std::tan(half) / (lobe.width == BeamWidth::fwhm ? half_maximum : 1.0);
    if (lobe.shape == LobeShape::ring) return ring_kernel(std::tan(lobe.ring / 2), width);
    return gaussian_kernel(width, width);
}

double equivalent_half_width(const Kernel& kernel) {
    if (kernel.shape == KernelShape::gaussian) return std::max(kernel.a, kernel.b);
    // A Gaussian of 1/e2 radius w has a mean square radius of w^2 / 2.
    const double mean_square = 2 * pi * kernel.scale * integral(0, kernel.reach, 64, [&](double t) {
                                   const double x = (t - kernel.a) / kernel.b;
                                   return t * t * t * std::exp(-2 * x * x);
                               });
    return std::sqrt(2 * mean_square);
}

double power_within(const Kernel& kernel, double r) {
    if (r >= kernel.reach) return 1;
    if (kernel.shape == KernelShape::ring) return 2 * pi * kernel.scale * ring_moment(kernel.a, kernel.b, r);
    return -std::expm1(-2 * r * r / (kernel.a * kernel.b));
}

double finest_width(const Kernel& kernel) {
    switch (kernel.shape) {
        case KernelShape::gaussian:
            return std::min(kernel.a, kernel.b);
        case KernelShape::ring:
            return kernel.b;
        case KernelShape::rectangle:
        case KernelShape::round:
            return kernel.edge;
    }
    return 0;
}

double finest_width_near(const Kernel& kernel, double p, double q, double r) {
    // A Gaussian wall or edge has done all but 1e-6 of its work so many half widths away.
    constexpr double far = 2.5;
    const double smooth = std::numeric_limits<double>::infinity(), finest = finest_width(kernel);
    const auto near = [&](double place, double edge) { return std::abs(place - edge) < r + far * finest; };
    switch (kernel.shape) {
        case KernelShape::gaussian:
            return finest;
        case KernelShape::ring:
        case KernelShape::round: {
            const double beside = std::hypot(p, q);
            // An edge that reaches the axis makes a tip there.
            if (beside < r && kernel.a < far * finest) return std::min(finest, r);
            return near(beside, kernel.a) ? finest : smooth;
        }
        case KernelShape::rectangle:
            return near(std::abs(p), kernel.a) || near(std::abs(q), kernel.b) ? finest : smooth;
    }
    return 0;
}

double captured_share(const Kernel& kernel, double distance, double offset, double radius) {
    const double within = offset < radius ? power_within(kernel, (radius - offset) / distance) : 0;
    if (offset <= 0) return within;
    // Circles of light between the two distances lie partly inside. With rho = middle - half cos(phi) the
    // integrand is smooth at both ends.
    const double low = std::abs(radius - offset), high = radius + offset;
    const double middle = (low + high) / 2, half = (high - low) / 2;
    const double partly = integral(0, pi, 16, [&](double phi) {
        const double rho = middle - half * std::cos(phi), t = rho / distance;
        if (t > kernel.reach || rho <= 0) return 0.0;
        const double cosine = (offset * offset + rho * rho - radius * radius) / (2 * offset * rho);
        const double arc =
            std::acos(std::clamp(cosine, -1.0, 1.0)) / pi;  // share of the circle inside the lens
        const double x = kernel.shape == KernelShape::ring ? (t - kernel.a) / kernel.b
                                                           : t / std::sqrt(kernel.a * kernel.b);
        const double density = 2 * pi * t / distance * kernel.scale * std::exp(-2 * x * x);  // power per rho
        return density * arc * half * std::sin(phi);
    });
    return std::min(1.0, within + partly);
}

}  // namespace glint
