// Random small designs of every kind, the same for the same seed.
#include "random_designs.h"

#include <glint/core/constants.h>
#include <glint/core/samples.h>
#include <glint/emitter/array.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <vector>

namespace glint::test {
namespace {

constexpr std::array firing_orders{FiringOrder::raster,        FiringOrder::serpentine,
                                   FiringOrder::stride,        FiringOrder::bit_reversed,
                                   FiringOrder::farthest_next, FiringOrder::shuffled};

// Every choice a design makes, drawn one after the other.
struct Draw {
    RandomStream random;

    bool chance(double share) { return random.uniform() < share; }
    double between(double low, double high) { return low + (high - low) * random.uniform(); }
    double decades(double low, double high) { return low * std::pow(high / low, random.uniform()); }
    int whole(int low, int high) {
        return low + static_cast<int>(random.below(static_cast<std::uint64_t>(high - low + 1)));
    }
    int divisor(int number) {
        std::vector<int> divisors;
        for (int d = 1; d <= number; ++d)
            if (number % d == 0) divisors.push_back(d);
        return divisors[random.below(divisors.size())];
    }
    template <class T>
    T one_of(std::initializer_list<T> list) {
        return *(list.begin() + random.below(list.size()));
    }
};

Layout layout(Draw& draw) {
    const int most = draw.chance(0.75) ? 3 : draw.chance(0.8) ? 4 : 8;
    Layout layout{
        .rows = draw.whole(1, most), .columns = draw.whole(1, most), .pitch = draw.decades(10e-6, 2e-3)};
    layout.kind =
        draw.one_of({LayoutKind::grid, LayoutKind::grid, LayoutKind::hexagonal, LayoutKind::scattered});
    if (layout.kind == LayoutKind::grid && draw.chance(0.3))
        layout.row_pitch = layout.pitch * draw.between(0.6, 3);
    if (layout.kind == LayoutKind::scattered) {
        layout.spacing = layout.pitch;
        layout.width = layout.pitch * draw.between(0.5, 4),
        layout.height = layout.pitch * draw.between(0.5, 4);
        layout.seed = draw.whole(1, 1000);
        layout.rows = layout.columns = 1;
    }
    return layout;
}

Addressing addressing(Draw& draw, const Layout& layout) {
    using enum AddressingScheme;
    if (layout.kind == LayoutKind::scattered) {
        if (draw.chance(0.5)) return {.scheme = individual};
        return {.scheme = blocks, .rows = draw.whole(1, 3), .columns = draw.whole(1, 3)};
    }
    Addressing addressing{.scheme = draw.one_of({individual, rows, columns, blocks, interleaved, matrix})};
    // Lines, blocks and phases of equal size.
    if (addressing.scheme == blocks || addressing.scheme == interleaved || draw.chance(0.3)) {
        addressing.rows = draw.divisor(layout.rows);
        addressing.columns = draw.divisor(layout.columns);
    }
    return addressing;
}

// Extent of the chip from its middle.
double half_width(const Layout& layout) {
    if (layout.kind == LayoutKind::scattered) return std::hypot(layout.width, layout.height) / 2;
    return std::hypot(layout.rows * layout.row_pitch.value_or(layout.pitch),
                      (layout.columns + 0.5) * layout.pitch) /
           2;
}

// Neighbours are sent 0.3 mrad to 50 mrad apart, and the field stays within 30 degrees.
Lens lens(Draw& draw, double pitch, double half, double lobe) {
    Lens lens{.focal_length =
                  std::max(std::clamp(pitch / draw.decades(0.3e-3, 50e-3), 1e-3, 50e-3), 1.8 * half)};
    lens.clear_aperture = 2 * (half + lens.focal_length * std::tan(lobe / 2) * draw.between(0.7, 1.5));
    lens.mapping = draw.one_of({LensMapping::tangent, LensMapping::f_theta});
    if (draw.chance(0.5)) lens.defocus = lens.focal_length * draw.between(-0.1, 0.1) * draw.decades(0.01, 1);
    if (draw.chance(0.2)) lens.blur = draw.decades(1e-4, 5e-3);
    lens.transmission = draw.between(0.8, 1);
    return lens;
}

Diffuser diffuser(Draw& draw) {
    Diffuser diffuser{.shape = draw.one_of({FieldShape::rectangle, FieldShape::round})};
    diffuser.horizontal = radians(draw.between(10, 90));
    diffuser.vertical = radians(draw.between(10, 70));
    diffuser.diameter = radians(draw.between(10, 90));
    diffuser.roll_off = radians(draw.between(1, 6));
    diffuser.exponent = draw.between(0, 4);
    diffuser.distance = draw.chance(0.5) ? draw.decades(1e-4, 5e-3) : 0;
    return diffuser;
}

FanOut fan_out(Draw& draw, double wavelength) {
    FanOut fan_out{.orders_right = draw.one_of({1, 3, 3, 5}), .orders_up = draw.one_of({1, 1, 3})};
    fan_out.period_right = wavelength / std::sin(radians(draw.decades(0.1, 6)));
    fan_out.period_up = wavelength / std::sin(radians(draw.decades(0.1, 6)));
    fan_out.efficiency = draw.between(0.5, 0.9);
    if (draw.chance(0.5) && fan_out.orders_right * fan_out.orders_up > 1)
        fan_out.zero_order = draw.between(0.01, 0.1);
    return fan_out;
}

// Shots and zones so that a frame holds at most 64 pulses; pauses so that pulses never overlap.
Firing firing(Draw& draw, const EmitterArray& array, double pulse_width) {
    const int zones = array.zones;
    Firing firing{.order = firing_orders[draw.random.below(firing_orders.size())]};
    firing.stride = draw.whole(1, zones);
    firing.seed = draw.whole(1, 1000);
    if (firing.order == FiringOrder::serpentine && array.zone_rows == 0) firing.order = FiringOrder::raster;
    if (draw.chance(0.5)) firing.zones_at_once = draw.divisor(zones);
    const int dwells = zones / firing.zones_at_once;
    firing.shots = std::min(draw.whole(1, 8), std::max(1, 64 / dwells));
    const double period = draw.decades(std::max(1.1 * pulse_width, 50e-9), std::max(20 * pulse_width, 3e-3));
    firing.repetition = 1 / period;
    if (draw.chance(0.6)) firing.gap = draw.decades(1e-7, 1e-2);
    if (draw.chance(0.5))
        firing.frame_period = dwells * (firing.shots * period + firing.gap) * draw.decades(1.01, 300);
    return firing;
}

}  // namespace

Design random_design(std::uint64_t seed) {
    Draw draw{RandomStream(seed)};
    Design design;
    Emitters& emitters = design.emitters;
    emitters.wavelength = draw.chance(0.15) ? draw.between(400e-9, 700e-9) : draw.between(700e-9, 1350e-9);
    emitters.layout = layout(draw);
    emitters.addressing = addressing(draw, emitters.layout);
    emitters.aperture = std::min(emitters.layout.pitch * draw.between(0.1, 0.55), 60e-6);
    if (draw.chance(0.3)) emitters.near_field_radius = emitters.aperture * draw.between(0.3, 0.6);
    emitters.lobe.divergence = radians(draw.decades(1, 40));
    if (draw.chance(0.15))
        emitters.lobe.shape = LobeShape::ring,
        emitters.lobe.ring = emitters.lobe.divergence * draw.between(0.5, 1.5);
    emitters.lobe.width = draw.one_of({BeamWidth::full_1e2, BeamWidth::full_1e2, BeamWidth::fwhm});

    design.drive.peak_power = draw.decades(1e-3, 10);
    design.drive.pulse_width = draw.chance(0.7) ? draw.decades(0.5e-9, 1e-6) : draw.decades(1e-6, 300e-6);
    const Layout& places = emitters.layout;
    const EmitterArray array = build_array(emitters, FieldSense::upright, {});
    design.firing = firing(draw, array, design.drive.pulse_width);

    const double half = half_width(places);
    std::vector<OpticalElement>& elements = design.optics.elements;
    switch (draw.whole(0, 9)) {
        case 0:
        case 1:
            break;
        case 2:
        case 3:
        case 4:
        case 5:
            elements = {lens(draw, places.pitch, half, emitters.lobe.divergence)};
            break;
        case 6:
            elements = {diffuser(draw)};
            break;
        case 7:
            elements = {lens(draw, places.pitch, half, emitters.lobe.divergence), diffuser(draw)};
            break;
        default:
            elements = {lens(draw, places.pitch, half, emitters.lobe.divergence),
                        fan_out(draw, emitters.wavelength)};
    }
    design.eye_safety.time_base = draw.one_of({100.0, 100.0, 100.0, 30e3, 0.25});
    return design;
}

}  // namespace glint::test
