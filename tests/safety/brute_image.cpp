// What an eye sees of a module, worked out a second time: energies by sums over the pupil, the image by
// matrices.
#include "brute_image.h"

#include <glint/core/constants.h>

#include <algorithm>
#include <cmath>

namespace glint::test {
namespace {

using Mat2 = Eigen::Matrix2d;

// A beam's 1/e2 radius a distance along its axis.
double radius_along(const Beam& beam, double along) {
    const double half = std::min(beam.kernel.a, beam.kernel.b), W = beam.exit_radius, c = beam.curvature;
    const double own2 = std::max(0.0, half * half - c * W * c * W), grown = W * (1 + along * c);
    return std::sqrt(grown * grown + along * along * own2);
}

// Share of a round Gaussian inside a disc beside it: rings around the beam's middle, each by its part in the
// disc.
double share_beside(double width, double beside, double radius) {
    constexpr int rings = 400;
    const double from = std::max(0.0, beside - radius), to = std::min(beside + radius, 4 * width);
    double share = 0;
    for (int i = 0; i < rings; ++i) {
        const double r = from + (to - from) * (i + 0.5) / rings, r0 = from + (to - from) * i / rings,
                     r1 = from + (to - from) * (i + 1) / rings;
        const double cosine = beside > 0 ? (r * r + beside * beside - radius * radius) / (2 * r * beside)
                                         : (r < radius ? -1.0 : 1.0);
        const double inside = std::acos(std::clamp(cosine, -1.0, 1.0)) / pi;
        share +=
            inside * (std::exp(-2 * r0 * r0 / (width * width)) - std::exp(-2 * r1 * r1 / (width * width)));
    }
    return to > from ? share : 0;
}

// Power [W] of a wide beam over the pupil: rings of equal area, many directions.
double power_over(const Beam& beam, const BruteEye& eye) {
    constexpr int rings = 48, spokes = 24;
    const Vec3 facing = eye.place.normalized();
    const Vec3 across = facing.unitOrthogonal(), up = facing.cross(across);
    double sum = 0;
    for (int i = 0; i < rings; ++i)
        for (int k = 0; k < spokes; ++k) {
            const double r = eye.pupil_radius * std::sqrt((i + 0.5) / rings),
                         turn = 2 * pi * (k + 0.5 * (i % 2)) / spokes;
            const Vec3 ray = eye.place + r * std::cos(turn) * across + r * std::sin(turn) * up - beam.origin;
            const double length = ray.norm();
            sum +=
                intensity(beam, ray / length) * std::max(0.0, ray.dot(facing)) / (length * length * length);
        }
    return sum / (rings * spokes) * pi * eye.pupil_radius * eye.pupil_radius;
}

}  // namespace

double brute_energy(const Beam& beam, const BruteEye& eye, double pulse_width) {
    if (beam.origin.x() >= eye.place.x()) return 0;
    if (beam.kernel.shape != KernelShape::gaussian || beam.kernel.reach > 0.15)
        return std::min(beam.power, power_over(beam, eye)) * pulse_width;
    const Vec3 path = eye.place - beam.origin;
    const double along = path.dot(beam.axis), beside = path.cross(beam.axis).norm();
    if (along <= 0) return 0;
    const double width = radius_along(beam, along);
    if (beside > eye.pupil_radius + 3 * width) return 0;
    return share_beside(width, beside, eye.pupil_radius) * beam.power * pulse_width;
}

std::vector<BruteSpot> brute_image(const Beams& beams, const BruteEye& eye, double pulse_width) {
    const double p = eye.place.y() / eye.place.x(),
                 q = eye.place.z() / eye.place.x();  // slopes of the line of sight
    const double secant2 = 1 + p * p + q * q;
    const Vec2 angle_per_slope(std::sqrt(1 + q * q) / secant2, std::sqrt(1 + p * p) / secant2);
    const double V = eye.vergence * std::sqrt(secant2);  // along the axis
    const double cut2 = std::pow(1.124 * eye.pupil_radius, 2);
    std::vector<BruteSpot> image;
    for (const Beam& beam : beams.beams) {
        const double energy = brute_energy(beam, eye, pulse_width);
        if (energy <= 0) continue;
        // Moments of (place, slope) where the beam leaves the optics, as squares of 1/e2 radii. The slopes of
        // a wide field are even over what the pupil takes: a half width of 100 stands for that.
        const double cosine = beam.axis.x(), W = beam.exit_radius, c = beam.curvature;
        double half = std::min(beam.kernel.a / (cosine * cosine), beam.kernel.b / cosine);
        if (beam.kernel.shape != KernelShape::gaussian) half = 100;
        const double slope2 = std::max(half * half, c * c * W * W);
        Mat2 moments;
        moments << W * W, c * W * W, c * W * W, slope2;
        const double path = eye.place.x() - beam.origin.x();
        Mat2 transport;
        transport << 1, path, 0, 1;
        moments = (transport * moments * transport.transpose()).eval();
        // The pupil, as a Gaussian around its own middle, updates the beam's (the product of two Gaussians).
        const Vec2 gain = moments.col(0) / (moments(0, 0) + cut2);
        moments = (moments - gain * moments.row(0)).eval();
        const Vec2 focus(-V, 1);  // image angle of (place, slope)
        const double radius = std::sqrt(std::max(0.0, focus.dot(moments * focus)));
        const Vec2 halves = std::max(1e-9, std::sqrt(pi / 2) * radius / 2) * angle_per_slope;
        Vec2 middle;
        for (int axis = 0; axis < 2; ++axis) {
            const double slope = beam.axis[axis + 1] / beam.axis.x();
            Vec2 ray(beam.origin[axis + 1] + path * slope - eye.place[axis + 1], slope);
            ray -= gain * ray.x();
            middle[axis] = focus.dot(ray) * angle_per_slope[axis];
        }
        image.push_back({middle - halves, middle + halves, energy, beam.zone});
    }
    return image;
}

}  // namespace glint::test
