// Emitters through the projection optics, element by element.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/quantity.h>
#include <glint/optics/beam.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>

namespace glint {
namespace {

// 10-90 % width of an edge softened by a Gaussian, over the Gaussian's standard deviation: 2 * 1.281552.
constexpr double edge_10_90 = 2.563103;

Beams bare(const EmitterArray& array, const Design& design) {
    const Kernel kernel = lobe_kernel(design.emitters.lobe);
    const double radius = design.emitters.near_field_radius.value_or(design.emitters.aperture / 2);
    Beams beams{.beams = {},
                .losses = {},
                .emitted = static_cast<double>(array.size()) * design.drive.peak_power,
                .zones = array.zones};
    beams.beams.reserve(array.size());
    for (std::size_t i = 0; i < array.size(); ++i)
        beams.beams.push_back({.origin = Vec3(0, -array.positions[i].x(), array.positions[i].y()),
                               .axis = Vec3::UnitX(),
                               .right = -Vec3::UnitY(),
                               .kernel = kernel,
                               .power = design.drive.peak_power * array.power_of(i),
                               .exit_radius = radius,
                               .zone = array.zone_of[i],
                               .emitter = static_cast<int>(i)});
    return beams;
}

// Direction and local scale of the mapping at distance r from the axis.
struct Mapped {
    double angle;       ///< to the axis [rad]
    double radial;      ///< change of angle with r/f along the radius
    double tangential;  ///< and across it
};

Mapped map(const Lens& lens, double r) {
    if (lens.mapping == LensMapping::f_theta) {
        const double angle = r / lens.focal_length;
        return {angle, 1, angle > 0 ? std::sin(angle) / angle : 1};
    }
    const double angle = std::atan(r / lens.focal_length), cosine = std::cos(angle);
    return {angle, cosine * cosine, cosine};
}

void through_lens(Beams& beams, const Lens& lens, const Emitters& emitters) {
    const Kernel lobe = beams.beams.front().kernel;
    const double lobe_width = equivalent_half_width(lobe);
    const double distance = lens.focal_length + lens.defocus;
    const double spot = beams.beams.front().exit_radius;
    // 1/e2 radius of the light in the focal plane over f: the residual half divergence on axis.
    const double residual = std::hypot(spot, lens.defocus * lobe_width) / lens.focal_length;
    double missed = 0, absorbed = 0, kept = 0;
    for (Beam& beam : beams.beams) {
        const double u = -beam.origin.y(), v = beam.origin.z(), r = std::hypot(u, v);
        const Mapped mapped = map(lens, r);
        if (mapped.angle > radians(80))
            throw Error(Problem{
                .what = fmt::format("an emitter {} off the axis would be sent {} aside",
                                    show_quantity(r, Kind::length), show_quantity(mapped.angle, Kind::angle)),
                .accepted = "a longer focal length or a smaller chip: at most 80 deg",
                .path = "optics/lens/focal_length"});
        const double captured = captured_share(lobe, distance, r, lens.clear_aperture / 2);
        missed += beam.power * (1 - captured);
        absorbed += beam.power * captured * (1 - lens.transmission);
        beam.power *= captured * lens.transmission;
        kept += beam.power;
        // The lens turns the picture over: an emitter to the right (u > 0) is sent to the left.
        const Vec3 outward = r > 0 ? Vec3(0, u / r, -v / r) : Vec3::UnitZ().eval();
        beam.axis = std::cos(mapped.angle) * Vec3::UnitX() + std::sin(mapped.angle) * outward;
        beam.right = std::cos(mapped.angle) * outward - std::sin(mapped.angle) * Vec3::UnitX();  // radial
        beam.kernel = gaussian_kernel(std::hypot(residual * mapped.radial, lens.blur),
                                      std::hypot(residual * mapped.tangential, lens.blur));
        beam.origin.x() = lens.focal_length;
        beam.exit_radius = std::min(distance * lobe_width, lens.clear_aperture / 2);
        beam.curvature = -lens.defocus / (lens.focal_length * distance);
    }
    beams.losses.push_back({"beside the lens", missed});
    beams.losses.push_back({"in the lens", absorbed});
    if (kept < 1e-6 * beams.emitted)
        throw Error(Problem{.what = fmt::format("almost no light of the {} chip passes the lens",
                                                show_quantity(emitters.aperture, Kind::length)),
                            .accepted = "a clear aperture wider than the chip",
                            .path = "optics/lens/clear_aperture"});
}

void through_diffuser(Beams& beams, const Diffuser& diffuser) {
    // The edge is the diffuser's own, softened further by the spread of the light that arrives.
    const double own =
        2 * std::tan(diffuser.roll_off) / edge_10_90;  // 1/e2 half width is two standard deviations
    const double edge = std::hypot(own, equivalent_half_width(beams.beams.front().kernel));
    const Kernel kernel = diffuser.shape == FieldShape::round
                              ? round_kernel(std::tan(diffuser.diameter / 2), edge, diffuser.exponent)
                              : rectangle_kernel(std::tan(diffuser.horizontal / 2),
                                                 std::tan(diffuser.vertical / 2), edge, diffuser.exponent);
    double lost = 0;
    for (Beam& beam : beams.beams) {
        lost += beam.power * (1 - diffuser.transmission);
        beam.power *= diffuser.transmission;
        beam.right = beam.axis.cross(Vec3::UnitZ()).normalized();  // keep the field upright
        beam.exit_radius = radius_at(beam, diffuser.distance);
        beam.curvature = 0;
        beam.origin += diffuser.distance / beam.axis.x() * beam.axis;
        beam.kernel = kernel;
    }
    beams.losses.push_back({"in the diffuser", lost});
}

// What one order of a fan-out does to every beam: a shift of direction cosines, and a share of the power.
struct Order {
    double shift_right, shift_up;
    double share;
};

std::vector<Order> orders_of(const FanOut& fan_out, double wavelength) {
    std::vector<Order> orders;
    const int right = fan_out.orders_right / 2, up = fan_out.orders_up / 2;  // both numbers are odd
    const int wanted = fan_out.orders_right * fan_out.orders_up;
    // The zero order, when it is given on its own, is taken out of the shared efficiency.
    const double zero = fan_out.zero_order.value_or(fan_out.efficiency / wanted);
    const double others =
        fan_out.zero_order ? fan_out.efficiency / std::max(1, wanted - 1) : fan_out.efficiency / wanted;
    for (int n = up; n >= -up; --n)
        for (int m = -right; m <= right; ++m)
            orders.push_back({fan_out.orders_right > 1 ? m * wavelength / fan_out.period_right : 0,
                              fan_out.orders_up > 1 ? n * wavelength / fan_out.period_up : 0,
                              m == 0 && n == 0 ? zero : others});
    return orders;
}

void through_fan_out(Beams& beams, const FanOut& fan_out, double wavelength) {
    const std::vector<Order> orders = orders_of(fan_out, wavelength);
    double beyond = 0, unused = 0;
    std::vector<Beam> fanned;
    fanned.reserve(beams.beams.size() * orders.size());
    for (const Beam& beam : beams.beams) {
        double sent = 0;
        for (const Order& order : orders) {
            sent += order.share;
            const double y = beam.axis.y() - order.shift_right, z = beam.axis.z() + order.shift_up;
            const double x2 = 1 - y * y - z * z;
            if (x2 < 0.03) {  // 80 degrees: as good as along the surface
                beyond += beam.power * order.share;
                continue;
            }
            Beam copy = beam;
            copy.axis = Vec3(std::sqrt(x2), y, z);
            copy.power = beam.power * order.share;
            copy.right = copy.axis.cross(Vec3::UnitZ()).normalized();
            // Spreads are kept in direction cosines, so they grow with the obliquity of the order.
            const double stretch = std::sqrt(beam.axis.x() / copy.axis.x());
            if (beam.kernel.shape == KernelShape::gaussian)
                copy.kernel = gaussian_kernel(beam.kernel.a * stretch, beam.kernel.b * stretch);
            fanned.push_back(copy);
        }
        unused += beam.power * (1 - sent);
    }
    beams.beams = std::move(fanned);
    beams.losses.push_back({"in unwanted orders", unused});
    beams.losses.push_back({"in orders beyond 80 degrees", beyond});
}

}  // namespace

double radius_at(const Beam& beam, double along) {
    const double whole = std::min(beam.kernel.a, beam.kernel.b), bent = beam.curvature * beam.exit_radius;
    const double own = std::sqrt(std::max(0.0, whole * whole - bent * bent));
    return std::hypot(beam.exit_radius * (1 + along * beam.curvature), along * own);
}

Beams project(const EmitterArray& array, const Design& design) {
    Beams beams = bare(array, design);
    for (const OpticalElement& element : design.optics.elements) {
        if (const Lens* lens = std::get_if<Lens>(&element)) through_lens(beams, *lens, design.emitters);
        if (const Diffuser* diffuser = std::get_if<Diffuser>(&element)) through_diffuser(beams, *diffuser);
        if (const FanOut* fan_out = std::get_if<FanOut>(&element))
            through_fan_out(beams, *fan_out, design.emitters.wavelength);
    }
    return beams;
}

double intensity(const Beam& beam, const Vec3& direction) {
    const double forward = direction.dot(beam.axis);
    if (forward <= 0) return 0;
    const double p = direction.dot(beam.right) / forward;
    const double q = direction.dot(beam.right.cross(beam.axis)) / forward;
    return beam.power * intensity(beam.kernel, p, q);
}

std::vector<double> zone_powers(const Beams& beams) {
    std::vector<double> powers(static_cast<std::size_t>(beams.zones), 0.0);
    for (const Beam& beam : beams.beams) powers[beam.zone] += beam.power;
    return powers;
}

}  // namespace glint
