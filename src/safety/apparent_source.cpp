// The apparent source: the image of every beam on the retina of an eye at a place, focused at a distance.
#include <glint/core/constants.h>
#include <glint/safety/apparent_source.h>
#include <glint/safety/factors.h>

#include <algorithm>
#include <array>
#include <cmath>

namespace glint {
namespace {

constexpr double most_vergence = 10;  // an eye focused at 100 mm
// 1/e2 radius of the Gaussian with the 63 % diameter of an evenly lit disc of radius 1: sqrt(0.632) *
// sqrt(2).
constexpr double disc_as_gaussian = 1.124;
// Side of the square with the peak and the energy of a Gaussian, over its 1/e2 radius: sqrt(pi / 2).
const double square_of_gaussian = std::sqrt(pi / 2);
// Slopes of a wide field are spread evenly over the little that the pupil takes.
constexpr double even_spread = 100;

Vec2 across(const Vec3& v) { return {v.y(), v.z()}; }

EnteringBeam entering_beam(const Beam& beam, const EyePlace& eye, double energy) {
    EnteringBeam entering{
        .zone = beam.zone, .energy = energy, .width = beam.exit_radius, .curvature = beam.curvature};
    entering.slope = across(beam.axis) / beam.axis.x();
    entering.path = eye.place.x() - beam.origin.x();
    entering.offset = across(beam.origin) + entering.path * entering.slope - across(eye.place);
    if (beam.kernel.shape != KernelShape::gaussian) {
        entering.spread = even_spread;
        return entering;
    }
    // Half widths across the axis become slopes: over cos^2 along the radius, over cos across it. The smaller
    // counts.
    const double cosine = beam.axis.x();
    const double whole = std::min(beam.kernel.a / (cosine * cosine), beam.kernel.b / cosine);
    const double bent = beam.curvature * beam.exit_radius;
    entering.spread = std::sqrt(std::max(0.0, whole * whole - bent * bent));
    return entering;
}

// Second moments of a beam, in 1/e2 radii squared, at the pupil and in the image.
struct Moments {
    double place;  // in the pupil
    double image;  // of the retinal angle
    double both;
};

Moments moments(const EnteringBeam& beam, double vergence) {
    const double w2 = beam.width * beam.width, s2 = beam.spread * beam.spread, l = beam.path;
    const double grown = 1 + l * beam.curvature;              // place in the pupil per place at the origin
    const double turned = beam.curvature - grown * vergence;  // image angle per place at the origin
    const double seen = 1 - l * vergence;                     // image angle per slope
    return {w2 * grown * grown + l * l * s2, w2 * turned * turned + s2 * seen * seen,
            w2 * grown * turned + s2 * l * seen};
}

constexpr double wide = 0.15;  // tangent: beams that reach farther change little over an array

// The share of alike, wide beams over their origins: worked out at 5 x 5 places around the array and
// interpolated. Beams change over tens of millimetres at the nearest eye, arrays are a few millimetres wide.
class LocalShare {
public:
    static constexpr int nodes = 5;

    static bool serves(const FarField& field, double distance) {
        if (!field.alike || field.beams.size() <= nodes * nodes || field.beams.front().kernel.reach <= wide)
            return false;
        return std::ranges::all_of(
            field.beams, [&](const Beam& beam) { return across(beam.origin).norm() < 0.05 * distance; });
    }

    LocalShare(const FarField& field, const Aperture& aperture) {
        Vec2 high = across(field.beams.front().origin);
        low_ = high;
        for (const Beam& beam : field.beams)
            low_ = low_.cwiseMin(across(beam.origin)), high = high.cwiseMax(across(beam.origin));
        step_ = ((high - low_) / (nodes - 1)).cwiseMax(1e-9);
        Beam probe = field.beams.front();
        for (int i = 0; i < nodes; ++i)
            for (int k = 0; k < nodes; ++k) {
                probe.origin.y() = low_.x() + i * step_.x(), probe.origin.z() = low_.y() + k * step_.y();
                share_[i][k] = collected_share(probe, aperture);
            }
    }

    double operator()(const Vec3& origin) const {
        const auto weights = [](double at) {  // Lagrange's polynomials of degree 4 at 0, 1, 2, 3, 4
            std::array<double, nodes> w;
            w.fill(1);
            for (int i = 0; i < nodes; ++i)
                for (int k = 0; k < nodes; ++k)
                    if (k != i) w[i] *= (at - k) / (i - k);
            return w;
        };
        const auto u = weights((origin.y() - low_.x()) / step_.x()),
                   v = weights((origin.z() - low_.y()) / step_.y());
        double sum = 0;
        for (int i = 0; i < nodes; ++i)
            for (int k = 0; k < nodes; ++k) sum += u[i] * v[k] * share_[i][k];
        return std::max(0.0, sum);
    }

private:
    Vec2 low_, step_;
    double share_[nodes][nodes];
};

// Metric of direction over slopes: d(angle)^2 = (1 + q^2) dp^2 / (1 + p^2 + q^2)^2 along p.
Vec2 angle_per_slope(const Vec2& slope) {
    return Vec2(std::sqrt(1 + slope.y() * slope.y()), std::sqrt(1 + slope.x() * slope.x())) /
           (1 + slope.squaredNorm());
}

}  // namespace

Vec2 line_of_sight(const EyePlace& eye) {
    const Vec2 slope = across(eye.place) / eye.place.x();
    return slope.cwiseProduct(angle_per_slope(slope));
}

EnteringLight entering_light(const FarField& field, const EyePlace& eye, double pulse_width) {
    EnteringLight light{.eye = eye};
    const double distance = eye.place.norm();
    const Vec2 slope = across(eye.place) / eye.place.x();
    light.cosine = 1 / std::sqrt(1 + slope.squaredNorm());
    light.scale = angle_per_slope(slope);
    const Aperture aperture{.centre = eye.place, .radius = eye.pupil_radius};
    const auto enter = [&](const Beam& beam, double share) {
        const double energy = share * beam.power * pulse_width;
        if (beam.origin.x() >= eye.place.x() || energy <= 0) return;
        light.beams.push_back(entering_beam(beam, eye, energy));
        light.passed += energy;
    };
    if (LocalShare::serves(field, distance)) {
        const LocalShare share(field, aperture);
        light.beams.reserve(field.beams.size());
        for (const Beam& beam : field.beams) enter(beam, share(beam.origin));
        return light;
    }
    const double beside = (eye.pupil_radius + field.spread + 3 * field.widest_exit) / distance;
    const double reach = beside < 1 ? field.reach + std::asin(beside) : 2;
    beams_near(field, eye.place / distance, reach,
               [&](const Beam& beam) { enter(beam, collected_share(beam, aperture)); });
    return light;
}

Spot spot_of(const EnteringBeam& beam, const EnteringLight& light, double vergence) {
    const double v =
        vergence / light.cosine;  // planes are normal to the module's axis, not to the line of sight
    const double pupil = disc_as_gaussian * light.eye.pupil_radius, pupil2 = pupil * pupil;
    const Moments m = moments(beam, v);
    const double along = m.place > 0 ? m.both / m.place : 0;  // image angle per place in the pupil
    const double kept2 = m.place > 0 ? 1 / (1 / m.place + 1 / pupil2) : 0;
    const double spread2 = std::max(0.0, m.image - along * m.both) + along * along * kept2;
    // The pupil keeps the part of the beam nearer to its own middle.
    const Vec2 shift = along * (pupil2 / (m.place + pupil2) - 1) * beam.offset;
    const double half = std::max(1e-9, square_of_gaussian / 2 * std::sqrt(spread2));
    return {.middle = (beam.slope - v * beam.offset + shift).cwiseProduct(light.scale),
            .half = half * light.scale,
            .energy = beam.energy,
            .zone = beam.zone};
}

std::vector<Spot> retinal_image(const EnteringLight& light, double vergence) {
    std::vector<Spot> spots;
    spots.reserve(light.beams.size());
    for (const EnteringBeam& beam : light.beams) spots.push_back(spot_of(beam, light, vergence));
    return spots;
}

double whole_subtense(std::span<const Spot> image) {
    Vec2 low = Vec2::Constant(1e9), high = -low;
    for (const Spot& spot : image)
        low = low.cwiseMin(spot.middle - spot.half), high = high.cwiseMax(spot.middle + spot.half);
    return (high - low).cwiseMax(alpha_min).mean();
}

std::vector<double> crossings(const EnteringLight& light, std::span<const double> vergences,
                              std::span<const double> subtenses) {
    constexpr double close = 1e-4;  // 1/m: 1 urad of blur
    std::vector<double> found;
    for (std::size_t i = 1; i < vergences.size(); ++i)
        for (const double subtense : subtenses) {
            const auto larger = [&](double v) { return whole_subtense(retinal_image(light, v)) > subtense; };
            double from = vergences[i - 1], to = vergences[i];
            const bool larger_first = larger(from);
            if (larger_first == larger(to)) continue;
            while (to - from > close) {
                const double middle = (from + to) / 2;
                (larger(middle) == larger_first ? from : to) = middle;
            }
            found.insert(found.end(),
                         {std::max(vergences[i - 1], from - close), std::min(vergences[i], to + close)});
        }
    return found;
}

std::vector<double> vergences(const EnteringLight& light) {
    std::vector<double> list;
    // Beams so wide that the pupil alone shapes them come from where they start, whatever the focus: only
    // their size changes, and that steadily away from the focus on their origin.
    const bool steady = std::ranges::all_of(light.beams, [&](const EnteringBeam& beam) {
        return beam.spread * beam.path > 3 * light.eye.pupil_radius;
    });
    for (double v = 0; v <= most_vergence; v += steady ? 5 : 0.5) list.push_back(v);
    if (light.beams.empty()) return list;
    const auto add = [&](double along_axis) {
        const double v = along_axis * light.cosine;
        if (v > 0 && v < most_vergence) list.push_back(v);
    };
    // Beams of one array differ little; the strongest speaks for all.
    const EnteringBeam& beam = *std::ranges::max_element(light.beams, {}, &EnteringBeam::energy);
    const double w2 = beam.width * beam.width, s2 = beam.spread * beam.spread, l = beam.path,
                 grown = 1 + l * beam.curvature;
    if (l > 0) add(1 / l);
    // The spot is smallest where the derivative of w^2 (c - g v)^2 + s^2 (1 - l v)^2 is zero.
    if (w2 * grown * grown + s2 * l * l > 0)
        add((w2 * grown * beam.curvature + s2 * l) / (w2 * grown * grown + s2 * l * l));
    if (std::abs(grown) > 1e-9) add(beam.curvature / grown);
    // Middles of beams cross where their places in the pupil plane run against their slopes.
    double cross = 0, square = 0;
    for (const EnteringBeam& other : light.beams) {
        cross += (other.offset - beam.offset).dot(other.slope - beam.slope);
        square += (other.offset - beam.offset).squaredNorm();
    }
    if (square > 0) add(cross / square);
    std::ranges::sort(list);
    list.erase(std::unique(list.begin(), list.end(), [](double a, double b) { return b - a < 1e-6; }),
               list.end());
    return list;
}

}  // namespace glint
