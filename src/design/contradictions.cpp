// Fields that contradict each other although each is good alone.
#include <glint/core/constants.h>
#include <glint/design/load.h>

#include <fmt/format.h>
#include <algorithm>

namespace glint {
namespace {

std::string show(double value, Kind kind) { return show_quantity(value, kind); }

void check_timing(const Design& design, std::vector<Problem>& problems) {
    const double period = 1 / design.firing.repetition;
    if (design.drive.pulse_width > period)
        problems.push_back(
            {.what = fmt::format("a pulse of {} is longer than the {} from shot to shot",
                                 show(design.drive.pulse_width, Kind::time), show(period, Kind::time)),
             .accepted = "a pulse_width up to 1 / firing/repetition",
             .path = "drive/pulse_width"});
    // The histogram of one shot must end before the next shot, else echoes could not be told apart.
    const PhotonCounting& counting = design.receiver.photon_counting;
    const double flight = 2 * counting.gate / speed_of_light;
    if (flight > period)
        problems.push_back({.what = fmt::format("a gate of {} takes {}, but the next shot leaves after {}",
                                                show(counting.gate, Kind::length), show(flight, Kind::time),
                                                show(period, Kind::time)),
                            .accepted = fmt::format("a gate up to {}, or a firing/repetition up to {}",
                                                    show(period * speed_of_light / 2, Kind::length),
                                                    show(1 / flight, Kind::frequency)),
                            .path = "receiver/photon_counting/gate"});
    if (counting.bin > flight)
        problems.push_back({.what = "one bin is longer than the whole gate",
                            .accepted = fmt::format("a bin up to {}", show(flight, Kind::time)),
                            .path = "receiver/photon_counting/bin"});
}

void check_band(const Design& design, std::vector<Problem>& problems) {
    const Filter& filter = design.receiver.filter;
    const double low = filter.center - filter.width / 2, high = filter.center + filter.width / 2;
    const double wavelength = design.emitters.wavelength;
    if (wavelength < low || wavelength > high)
        problems.push_back(
            {.what = fmt::format("the filter passes {} to {}, the emitters send {}",
                                 show_quantity(low, Kind::length, 4), show_quantity(high, Kind::length, 4),
                                 show_quantity(wavelength, Kind::length, 4)),
             .accepted = "a pass band that holds emitters/wavelength",
             .path = "receiver/filter/center"});
    if (low < 400e-9 || high > 1700e-9)
        problems.push_back({.what = "the pass band leaves the range of the solar spectrum known here",
                            .accepted = "a band within 400 nm to 1700 nm",
                            .path = "receiver/filter/width"});
}

template <class Element>
bool holds(const Optics& optics) {
    return std::ranges::any_of(
        optics.elements, [](const OpticalElement& each) { return std::holds_alternative<Element>(each); });
}

void check_eye_safety(const Design& design, std::vector<Problem>& problems) {
    const double tolerance = design.eye_safety.tolerances.wavelength, wavelength = design.emitters.wavelength;
    if (wavelength - tolerance < 400e-9 || wavelength + tolerance > 1800e-9)
        problems.push_back({.what = "the tolerance leaves the wavelengths that the limits cover",
                            .accepted = "a wavelength band within 400 nm to 1800 nm",
                            .path = "eye_safety/tolerances/wavelength"});
    for (const Fault& fault : design.eye_safety.faults.list) {
        const auto* missing = std::get_if<ElementMissing>(&fault);
        if (missing == nullptr) continue;
        const bool there = missing->element == ElementKind::lens      ? holds<Lens>(design.optics)
                           : missing->element == ElementKind::fan_out ? holds<FanOut>(design.optics)
                                                                      : holds<Diffuser>(design.optics);
        if (!there)
            problems.push_back({.what = "a fault takes away an element that the optics do not hold",
                                .accepted = "lens, fan_out or diffuser, whichever is in optics",
                                .path = "eye_safety/faults/element_missing/element"});
    }
}

void check_addressing(const Design& design, std::vector<Problem>& problems) {
    const Layout& layout = design.emitters.layout;
    const Addressing& addressing = design.emitters.addressing;
    const bool raster = layout.kind == LayoutKind::grid || layout.kind == LayoutKind::hexagonal;
    const AddressingScheme scheme = addressing.scheme;
    if (scheme == AddressingScheme::list && layout.kind != LayoutKind::list)
        problems.push_back({.what = "zones come from the emitter list, but the layout is no list",
                            .accepted = "emitters/layout kind=\"list\", or another scheme",
                            .path = "emitters/addressing/scheme"});
    const bool needs_lines = scheme == AddressingScheme::rows || scheme == AddressingScheme::columns ||
                             scheme == AddressingScheme::interleaved || scheme == AddressingScheme::matrix;
    if (needs_lines && !raster)
        problems.push_back({.what = "the layout has no rows and columns to wire",
                            .accepted = "scheme individual, blocks or, with a list, list",
                            .path = "emitters/addressing/scheme"});
    if (!raster) return;
    const auto divide = [&](std::optional<int> zones, int emitters, const char* which) {
        if (zones && emitters % *zones != 0)
            problems.push_back({.what = fmt::format("{} {} of zones do not divide the {} {} of emitters",
                                                    *zones, which, emitters, which),
                                .accepted = fmt::format("a divisor of {}", emitters),
                                .path = fmt::format("emitters/addressing/{}", which)});
    };
    divide(addressing.rows, layout.rows, "rows");
    divide(addressing.columns, layout.columns, "columns");
}

void check_fan_out(const FanOut& fan_out, std::vector<Problem>& problems) {
    const auto check = [&](int orders, double period, const char* direction) {
        if (orders % 2 == 0)
            problems.push_back({.what = fmt::format("{} orders have no middle", orders),
                                .accepted = "an odd number",
                                .path = fmt::format("optics/fan_out/orders_{}", direction)});
        if (orders > 1 && !(period > 0))
            problems.push_back({.what = "several orders need a period",
                                .accepted = "a period above 0",
                                .path = fmt::format("optics/fan_out/period_{}", direction)});
    };
    check(fan_out.orders_right, fan_out.period_right, "right");
    check(fan_out.orders_up, fan_out.period_up, "up");
    if (fan_out.efficiency + fan_out.zero_order.value_or(0) > 1)
        problems.push_back({.what = "efficiency and zero order are more than all of the light",
                            .accepted = "a sum up to 100 %",
                            .path = "optics/fan_out/zero_order"});
}

void check_optics(const Design& design, std::vector<Problem>& problems) {
    // The order that makes sense: lens, then fan-out, then diffuser; each at most once.
    constexpr const char* names[] = {"lens", "diffuser", "fan_out"};
    constexpr int places[] = {0, 2, 1};
    int last = -1;
    for (const OpticalElement& element : design.optics.elements) {
        const int place = places[element.index()];
        const std::string name = names[element.index()];
        if (place == last)
            problems.push_back(
                {.what = "a second " + name, .accepted = "one", .path = "optics/" + name + "[2]"});
        if (place < last)
            problems.push_back({.what = "the " + name + " stands too late",
                                .accepted = "the order lens, fan_out, diffuser, each at most once",
                                .path = "optics/" + name});
        last = std::max(last, place);
        if (const Lens* lens = std::get_if<Lens>(&element);
            lens != nullptr && lens->defocus <= -lens->focal_length / 2)
            problems.push_back({.what = "the chip would stand in the middle of the lens or beyond",
                                .accepted = "a defocus above minus half the focal length",
                                .path = "optics/lens/defocus"});
        if (const FanOut* fan_out = std::get_if<FanOut>(&element)) check_fan_out(*fan_out, problems);
    }
}

}  // namespace

std::vector<Problem> contradictions(const Design& design) {
    std::vector<Problem> problems;
    check_timing(design, problems);
    check_band(design, problems);
    check_addressing(design, problems);
    check_eye_safety(design, problems);
    check_optics(design, problems);
    return problems;
}

}  // namespace glint
