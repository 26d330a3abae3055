// Prints the verdict on eye safety for people.
#include <glint/core/constants.h>
#include <glint/core/quantity.h>
#include <glint/core/text.h>
#include <glint/report/safety_page.h>
#include <glint/safety/caution.h>
#include <glint/safety/domain.h>
#include <glint/safety/limits.h>

#include <fmt/format.h>
#include <algorithm>
#include <cctype>
#include <cmath>

namespace glint {
namespace {

constexpr std::size_t page_width = 80;

std::string milliradians(double angle) { return fmt::format("{:.3g} mrad", angle * 1e3); }

std::string zones_in_words(const std::vector<int>& zones) {
    if (zones.empty()) return "no zone";
    if (zones.size() == 1) return fmt::format("zone {}", zones.front());
    std::string text = fmt::format("{} zones (", zones.size());
    constexpr std::size_t most = 6;
    for (std::size_t i = 0; i < std::min(most, zones.size()); ++i)
        text += fmt::format("{}{}", i > 0 ? ", " : "", zones[i]);
    return text + (zones.size() > most ? ", ...)" : ")");
}

std::string place_in_words(const Vec3& eye) {
    const double right = degrees(std::atan2(-eye.y(), eye.x())),
                 up = degrees(std::atan2(eye.z(), std::hypot(eye.x(), eye.y())));
    std::string text = show_quantity(eye.norm(), Kind::length) + " from the chip";
    if (std::abs(right) < 0.05 && std::abs(up) < 0.05) return text + ", on the axis";
    if (std::abs(right) >= 0.05)
        text += fmt::format(", {:.1f} deg {}", std::abs(right), right > 0 ? "right" : "left");
    if (std::abs(up) >= 0.05) text += fmt::format(", {:.1f} deg {}", std::abs(up), up > 0 ? "up" : "down");
    return text;
}

std::string duration_in_words(const ExposureCase& each) {
    const std::string duration = show_quantity(each.duration, Kind::time);
    switch (each.criterion) {
        case PulseCriterion::single:
            return fmt::format("one pulse of {}", duration);
        case PulseCriterion::group:
            return fmt::format("{:.0f} pulses within Ti = {}", each.pulses, duration);
        case PulseCriterion::train:
            return fmt::format("a pulse or group of {}, N = {:.0f}, C5 = {:.3g}", duration, each.pulses,
                               each.C5);
        case PulseCriterion::average:
            break;
    }
    return fmt::format("{:.0f} pulses in {}", each.pulses, duration);
}

std::string in_words(const ExposureCase& each) {
    std::string text = fmt::format("{}, criterion {}: {}. ", name_of(each.condition), name_of(each.criterion),
                                   duration_in_words(each));
    text += fmt::format("The eye is {}", place_in_words(each.eye));
    if (each.subtense > 0) {
        text += std::isfinite(each.focus)
                    ? fmt::format(", focused at {}", show_quantity(each.focus, Kind::length))
                    : std::string(", focused at infinity");
        const Vec2 size = (each.part_high - each.part_low) * 1e3;
        text += fmt::format(". Part of its image: {:.3g} x {:.3g} mrad, subtense {} (C6 = {:.3g})", size.x(),
                            size.y(), milliradians(each.subtense), each.C6);
    } else {
        text += ". All light through the aperture counts";
    }
    return text + fmt::format(", lit by {}. AE {}, AEL {}.", zones_in_words(each.zones),
                              show_quantity(each.ae, Kind::energy), show_quantity(each.ael, Kind::energy));
}

std::string rule_of(const ExposureCase& each, double wavelength) {
    const double duration = std::clamp(each.duration, limit_durations.from, limit_durations.to);
    const std::optional<Limit> limit = class_limit(
        LaserClass::class_1, {wavelength, duration, std::max(each.subtense, alpha_min)}, each.mechanism);
    std::string text = limit ? describe(*limit->row) : std::string(name_of(each.mechanism));
    if (each.C5 < 1) text = fmt::format("C5 times {}", text);
    return text;
}

std::string case_table(const SafetyVerdict& verdict) {
    std::string text = fmt::format("  {:<8} {:>4} {:>9} {:>9} {:>6} {:>9} {:>9} {:>9} {:>7}\n", "criteri.",
                                   "cond", "duration", "pulses, N", "C5", "subtense", "AE", "AEL", "AE/AEL");
    for (const ExposureCase& each : verdict.criteria)
        text += fmt::format(
            "  {:<8} {:>4} {:>9} {:>9.3g} {:>6.3g} {:>9} {:>9} {:>9} {:>7.3g}\n", name_of(each.criterion),
            each.condition == Condition::telescope ? 1 : 3, show_quantity(each.duration, Kind::time),
            each.pulses, each.C5, each.subtense > 0 ? milliradians(each.subtense) : "-",
            show_quantity(each.ae, Kind::energy), show_quantity(each.ael, Kind::energy), each.ratio());
    return text;
}

std::string capital(std::string text) {
    if (!text.empty()) text[0] = static_cast<char>(std::toupper(static_cast<unsigned char>(text[0])));
    return text;
}

std::string fault_lines(const FaultVerdict& fault, LaserClass asked) {
    std::string text =
        wrapped(fmt::format("{}: {} while it lasts, worst AE/AEL of {} {:.3g}.", capital(fault.name),
                            name_of(fault.laser_class), name_of(asked), fault.worst_ratio),
                page_width, 2);
    std::string action;
    if (fault.holds)
        action = fmt::format("{} holds without a monitor.", name_of(asked));
    else if (fault.reaction_time)
        action = fmt::format("{} holds if the light is out {} after the fault begins.", name_of(asked),
                             show_quantity(*fault.reaction_time, Kind::time));
    else
        action = "It cannot be saved by switching off: one shot is too much.";
    text += wrapped(action, page_width, 6);
    if (fault.governing) text += wrapped(in_words(*fault.governing), page_width, 6);
    return text;
}

}  // namespace

std::string safety_section(const SafetyVerdict& verdict) {
    std::string text = fmt::format("Eye safety: {} by this estimate\n", name_of(verdict.laser_class));
    text += fmt::format("  worst AE/AEL of Class 1  {:.3g}, margin {:+.1f} %\n", verdict.worst_ratio,
                        100 * verdict.margin);
    if (verdict.asked != LaserClass::class_1)
        text += fmt::format("  worst AE/AEL of {:<8} {:.3g}\n", name_of(verdict.asked), verdict.asked_ratio);
    if (verdict.corners > 1 || verdict.corner != "nominal")
        text += wrapped(
            fmt::format("worst of {}: {}", counted(static_cast<long>(verdict.corners), "tolerance corner"),
                        verdict.corner),
            page_width, 2);
    if (touches(second_limit_wavelengths, verdict.light.wavelength))
        text += wrapped(second_limit_note, page_width, 2);
    if (verdict.criteria.empty()) return text + "  No light reaches any place where an eye can be.\n";
    text += "\nWhat governs\n";
    text += wrapped(in_words(verdict.criteria.front()), page_width, 2);
    text += "\nWorst case of each criterion, Class 1\n" + case_table(verdict);
    for (const ExposureCase& each : verdict.criteria)
        text +=
            wrapped(fmt::format("{}: {}", name_of(each.criterion), rule_of(each, verdict.light.wavelength)),
                    page_width, 2);
    text += fmt::format("\nWhat would still hold for {} with a margin of {:.3g} %\n", name_of(verdict.asked),
                        100 * verdict.asked_margin);
    text += fmt::format("  largest energy of a shot    {} at the chip\n",
                        show_quantity(verdict.largest_shot_energy, Kind::energy));
    text += fmt::format("  largest average power       {} at the chip\n",
                        show_quantity(verdict.largest_average_power, Kind::power));
    const auto distance = [](double value) {
        return value > 0 ? show_quantity(value, Kind::length)
                         : std::string("none, every allowed place is within Class 1");
    };
    text += "\nHazard distance from the chip\n";
    text += fmt::format("  naked eye                   {}\n", distance(verdict.hazard_distance));
    text += fmt::format("  with a telescope            {}\n", distance(verdict.aided_hazard_distance));
    return text;
}

std::string safety_text(const Design& design, const SafetyVerdict& verdict) {
    std::string text = wrapped(caution_paragraph, page_width) + "\n";
    if (!design.name.empty()) text += design.name + "\n\n";
    text += safety_section(verdict);
    if (!verdict.faults.empty())
        text += fmt::format("\nSingle faults, {} must hold\n", name_of(verdict.asked));
    for (const FaultVerdict& fault : verdict.faults) text += fault_lines(fault, verdict.asked);
    return text;
}

}  // namespace glint
