// Corners: the designs at the ends of the tolerances, one of which is the worst for the eye.
#include <glint/core/quantity.h>
#include <glint/safety/corners.h>
#include <glint/safety/factors.h>
#include <glint/safety/limits.h>

#include <fmt/format.h>
#include <algorithm>

namespace glint {
namespace {

std::vector<double> both_ends(double value, double share) {
    if (share == 0) return {value};
    return {value * (1 - share), value * (1 + share)};
}

// Whether no limit at `strict` is above that at `lax`, at a few durations of every cell of the tables.
bool never_laxer(double strict, double lax) {
    if (grouping_time(strict) < grouping_time(lax)) return false;
    for (const double duration : {5e-12, 1e-10, 1e-7, 4e-6, 9e-6, 1e-4, 0.1, 1.0, 9.0, 20.0, 99.0, 1e3})
        for (const double subtense : {alpha_min, 5e-3})
            for (const Mechanism mechanism : {Mechanism::retinal_thermal, Mechanism::photochemical,
                                              Mechanism::corneal, Mechanism::ceiling}) {
                const auto one = class_limit(LaserClass::class_1, {strict, duration, subtense}, mechanism);
                const auto other = class_limit(LaserClass::class_1, {lax, duration, subtense}, mechanism);
                if (other && (!one || one->energy > other->energy * (1 + 1e-12))) return false;
            }
    return true;
}

std::vector<double> wavelengths(const Design& design) {
    const double middle = design.emitters.wavelength, tolerance = design.eye_safety.tolerances.wavelength;
    if (tolerance == 0) return {middle};
    std::vector<double> list{middle - tolerance, middle + tolerance};
    for (const double bound :
         {450e-9, 484e-9, 600e-9, 700e-9, 1050e-9, 1150e-9, 1200e-9, 1250e-9, 1400e-9, 1500e-9})
        if (bound > list[0] && bound < list[1]) list.push_back(bound);
    const bool bent = std::ranges::any_of(design.optics.elements, [](const OpticalElement& each) {
        return std::holds_alternative<FanOut>(each);
    });
    if (bent) return list;
    std::vector<double> kept;
    for (std::size_t i = 0; i < list.size(); ++i) {
        bool needed = true;
        for (std::size_t k = 0; k < list.size() && needed; ++k)  // of two alike the first stays
            needed = k == i || !never_laxer(list[k], list[i]) || (k > i && never_laxer(list[i], list[k]));
        if (needed) kept.push_back(list[i]);
    }
    return kept;
}

std::vector<double> pulse_widths(const Design& design) {
    const double middle = design.drive.pulse_width, share = design.eye_safety.tolerances.pulse_width;
    const double longest = std::min(middle * (1 + share), 1 / design.firing.repetition);
    if (share == 0) return {middle};
    const double ti = grouping_time(design.emitters.wavelength + design.eye_safety.tolerances.wavelength);
    return longest <= ti ? std::vector{longest} : std::vector{middle * (1 - share), longest};
}

std::string change(std::string_view what, double value, double nominal) {
    return value == nominal ? std::string()
                            : fmt::format(", {} {:+.3g} %", what, 100 * (value / nominal - 1));
}

}  // namespace

std::vector<Corner> tolerance_corners(const Design& design) {
    const Tolerances& tolerances = design.eye_safety.tolerances;
    const Lens* lens = nullptr;
    for (const OpticalElement& element : design.optics.elements)
        if (const Lens* each = std::get_if<Lens>(&element)) lens = each;
    const double focal_length = lens != nullptr ? lens->focal_length : 0;
    std::vector<Corner> corners;
    for (const double divergence : both_ends(design.emitters.lobe.divergence, tolerances.divergence))
        for (const double focal :
             lens != nullptr ? both_ends(focal_length, tolerances.focal_length) : std::vector{0.0})
            for (const double pulse : pulse_widths(design))
                for (const double wavelength : wavelengths(design)) {
                    Corner corner{design, {}};
                    corner.design.eye_safety.tolerances = {};
                    corner.design.drive.peak_power *= 1 + tolerances.power;
                    corner.design.emitters.lobe.divergence = divergence;
                    corner.design.drive.pulse_width = pulse;
                    corner.design.emitters.wavelength = wavelength;
                    for (OpticalElement& element : corner.design.optics.elements)
                        if (Lens* each = std::get_if<Lens>(&element)) each->focal_length = focal;
                    std::string name =
                        change("power", corner.design.drive.peak_power, design.drive.peak_power) +
                        change("divergence", divergence, design.emitters.lobe.divergence) +
                        change("pulse width", pulse, design.drive.pulse_width);
                    if (lens != nullptr) name += change("focal length", focal, focal_length);
                    if (wavelength != design.emitters.wavelength)
                        name += ", wavelength " + show_quantity(wavelength, Kind::length, 4);
                    corner.name = name.empty() ? "nominal" : name.substr(2);
                    corners.push_back(std::move(corner));
                }
    return corners;
}

}  // namespace glint
