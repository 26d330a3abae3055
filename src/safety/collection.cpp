// Collection: how much of a beam passes an aperture in front of the module.
#include <glint/core/constants.h>
#include <glint/core/quadrature.h>
#include <glint/safety/collection.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <vector>

namespace glint {
namespace {

// Below this reach a beam's cross-section is flat enough for the closed form: cos(0.15) = 0.989.
constexpr double narrow = 0.15;

// Share of a round Gaussian of 1/e2 radius w that lies in a disc of radius R a distance d beside its middle:
// the sum of chords, sqrt(2/pi)/w exp(-2 (x - d)^2/w^2) erf(sqrt(2 (R^2 - x^2))/w) dx with x = R sin(phi),
// over the 3.2 w around the middle that hold all but 1e-9 of it. Gauss-Legendre on three or six pieces; good
// to 4e-4.
double disc_share(double d, double R, double w) {
    constexpr int pieces = 6;
    const double from = std::asin(std::clamp((d - 3.2 * w) / R, -1.0, 1.0)),
                 to = std::asin(std::clamp((d + 3.2 * w) / R, -1.0, 1.0));
    const double chords = integral(from, to, pieces, [&](double phi) {
        const double x = R * std::sin(phi), y = R * std::cos(phi);
        return y * std::exp(-2 * (x - d) * (x - d) / (w * w)) * std::erf(std::sqrt(2.0) * y / w);
    });
    return std::min(1.0, chords * std::sqrt(2 / pi) / w);
}

// disc_share for w of at least a twentieth of R, interpolated: searches ask for it millions of times. The
// nodes are even in d over the farthest that light reaches, and in the logarithm of w/(R + w); what is
// tabulated is the share over R^2/(R^2 + w^2), which stays finite for small discs. Cubic in both; good to
// 2e-4 of the share on axis.
class DiscShares {
public:
    static constexpr double narrowest = 0.05;  // w over R

    DiscShares() : values_(static_cast<std::size_t>(rows) * columns) {
        for (int row = 0; row < rows; ++row) {
            const double kappa = std::exp(least_ * (1 - static_cast<double>(row) / (rows - 1)));
            const double w = kappa / std::max(1 - kappa, 1e-3);
            for (int column = 0; column < columns; ++column) {
                const double d = std::abs(column - 1) * (1 + tail * w) / (columns - 3);
                values_[static_cast<std::size_t>(row) * columns + column] = disc_share(d, 1, w) * (1 + w * w);
            }
        }
    }

    [[nodiscard]] double operator()(double d, double R, double w) const {
        const double y = 1 + d / (R + tail * w) * (columns - 3);
        const double x = (1 - std::log(w / (R + w)) / least_) * (rows - 1);
        const int column = std::clamp(static_cast<int>(y), 1, columns - 3);
        const int row = std::clamp(static_cast<int>(x), 1, rows - 3);
        const std::array<double, 4> across = weights(y - column), down = weights(x - row);
        double sum = 0;
        for (int i = 0; i < 4; ++i) {
            const double* value = &values_[static_cast<std::size_t>(row - 1 + i) * columns + column - 1];
            sum += down[i] * (across[0] * value[0] + across[1] * value[1] + across[2] * value[2] +
                              across[3] * value[3]);
        }
        return std::clamp(sum * R * R / (R * R + w * w), 0.0, 1.0);
    }

private:
    static constexpr int rows = 66, columns = 195;  // one more column before the axis
    static constexpr double tail = 3.2;

    // Lagrange's cubic through -1, 0, 1, 2.
    static std::array<double, 4> weights(double t) {
        return {-t * (t - 1) * (t - 2) / 6, (t + 1) * (t - 1) * (t - 2) / 2, -(t + 1) * t * (t - 2) / 2,
                (t + 1) * t * (t - 1) / 6};
    }

    double least_ = std::log(narrowest / (1 + narrowest));
    std::vector<double> values_;
};

double share_of_narrow(const Beam& beam, const Aperture& aperture, double along, double beside) {
    const double width = radius_at(beam, along);
    if (width <= 0) return beside <= aperture.radius ? 1 : 0;
    if (beside > aperture.radius + 3 * width) return 0;
    if (beside + 3 * width < aperture.radius) return 1;
    if (width < DiscShares::narrowest * aperture.radius) return disc_share(beside, aperture.radius, width);
    static const DiscShares shares;
    return shares(beside, aperture.radius, width);
}

// Mean of f over the unit disc. Disc rule of degree 5 (Abramowitz and Stegun 25.4.61): the middle, and six
// points at sqrt(2/3) of the radius.
template <class F>
double mean_over_disc(const F& f) {
    const double ring = std::sqrt(2.0 / 3);
    double sum = f(Vec2::Zero()) / 4;
    for (int i = 0; i < 6; ++i) sum += f(ring * Vec2(std::cos(pi / 3 * i), std::sin(pi / 3 * i))) / 8;
    return sum;
}

// The same for a function with Gaussian structures of 1/e2 half width `detail`: circles of evenly spread
// points.
template <class F>
double mean_over_disc(double detail, const F& f) {
    constexpr double most_pieces = 16, most_spokes = 256;  // hard edges come out to half a percent
    const int pieces = static_cast<int>(std::clamp(std::ceil(1 / (1.5 * detail)), 1.0, most_pieces));
    return integral(0, 1, pieces, [&](double r) {
        const int spokes =
            static_cast<int>(std::clamp(std::ceil(2 * pi * r / (0.75 * detail)), 8.0, most_spokes));
        double sum = 0;
        for (int i = 0; i < spokes; ++i) {
            const double turn = 2 * pi * i / spokes;
            sum += f(Vec2(r * std::cos(turn), r * std::sin(turn)));
        }
        return 2 * r * sum / spokes;
    });
}

double share_of_wide(const Beam& beam, const Aperture& aperture) {
    const double distance = aperture.centre.norm();
    const Vec3 forward = aperture.centre / distance;
    const Vec3 right =
        forward.cross(std::abs(forward.z()) < 0.9 ? Vec3::UnitZ() : Vec3::UnitY()).normalized();
    const Vec3 up = right.cross(forward);
    const auto passing = [&](const Vec2& at) {
        const Vec3 path = aperture.centre + aperture.radius * (at.x() * right + at.y() * up) - beam.origin;
        const double squared = path.squaredNorm();
        const Vec3 direction = path / std::sqrt(squared);
        return intensity(beam, direction) * std::max(0.0, direction.dot(forward)) / squared;
    };
    const Vec3 path = aperture.centre - beam.origin;
    const double along = path.dot(beam.axis), cosine = along / path.norm();
    if (cosine <= 0) return 0;
    // Tangents change by up to 1/cos^2 per angle: the disc grows by as much in the kernel's coordinates.
    const double radius = aperture.radius / path.norm() / (cosine * cosine);
    const double p = path.dot(beam.right) / along, q = path.dot(beam.right.cross(beam.axis)) / along;
    if (std::hypot(p, q) > beam.kernel.reach + 2 * radius) return 0;
    const double detail = finest_width_near(beam.kernel, p, q, radius) / radius;
    const double mean = detail > 8 ? mean_over_disc(passing) : mean_over_disc(detail, passing);
    return std::min(1.0, mean * pi * aperture.radius * aperture.radius / beam.power);
}

}  // namespace

double collected_share(const Beam& beam, const Aperture& aperture) {
    const Vec3 path = aperture.centre - beam.origin;
    const double along = path.dot(beam.axis);
    if (beam.kernel.shape != KernelShape::gaussian || beam.kernel.reach > narrow)
        return share_of_wide(beam, aperture);
    if (along <= 0) return 0;
    return share_of_narrow(beam, aperture, along, (path - along * beam.axis).norm());
}

}  // namespace glint
