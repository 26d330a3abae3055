// The verdict for a terminal.
#include <glint/core/text.h>
#include <glint/report/safety_page.h>
#include <glint/report/tables.h>
#include <glint/safety/caution.h>

#include <fmt/format.h>

namespace glint {
namespace {

constexpr std::size_t page_width = 80;

std::string shortened(std::string text, std::size_t width) {
    if (text.size() > width) text = text.substr(0, width - 1) + ".";
    return text;
}

std::string requirement_table(const Assessment& assessment) {
    std::string text =
        fmt::format("{:<4} {:<23} {:<22} {:<20} {:>7}\n", "", "requirement", "needed", "got", "margin");
    text += std::string(page_width, '-') + "\n";
    for (const RequirementResult& each : assessment.requirements) {
        text += fmt::format("{:<4} {:<23} {:<22} {:<20} {:>7}\n", each.met ? "met" : "NOT",
                            shortened(each.name, 23), shortened(each.needed_text, 22),
                            shortened(each.got_text, 20), each.margin_text);
        if (!each.limited_by.empty()) text += wrapped("limited by " + each.limited_by, page_width, 5);
    }
    return text;
}

// Current, heat and drivers.
std::string drive_lines(const Design& design, const Assessment& assessment) {
    const DriverCount& count = assessment.drivers;
    std::string text =
        fmt::format("Drivers   {}, {}, {}\n", counted(count.channels, "channel"),
                    fmt::format("{} switched lines", count.switches), counted(count.pads, "pad"));
    if (!assessment.chip) return text;
    const Chip& chip = *assessment.chip;
    const DriverState& driver = chip.driver;
    const auto show = [](double value, Kind kind) { return show_quantity(value, kind); };
    double coldest = 1e9, hottest = 0;
    for (const EmitterState& emitter : chip.state.emitters) {
        coldest = std::min(coldest, emitter.average_temperature);
        hottest = std::max(hottest, emitter.average_temperature);
    }
    text +=
        fmt::format("          {} a channel, {} the chip\n", show(driver.load.channel_current, Kind::current),
                    show(driver.load.current, Kind::current));
    if (driver.storage > 0)  // a driver that cannot make the pulse is a finding
        text +=
            fmt::format("          supply {}, rise {}, {} beside each channel, takes {}\n",
                        show(driver.supply, Kind::voltage), show(driver.rise_time, Kind::time),
                        show(driver.storage, Kind::capacitance), show(driver.electrical_power, Kind::power));
    if (driver.charge > 0 && design.drive.driver.kind == DriverKind::resonant)
        text += fmt::format("          resonant: {} a pulse, damping {:.2f}\n",
                            show(driver.charge, Kind::charge), driver.damping);
    if (driver.half_selected)
        text += fmt::format("          half-selected emitters see {}, dark below {}\n",
                            show(driver.half_selected->voltage, Kind::voltage),
                            show(driver.half_selected->limit, Kind::voltage));
    text += fmt::format("Diode     {} peak, {} peak, {:.0f} kA/cm2; {:.1f} % of the power becomes light\n",
                        show(chip.state.current, Kind::current), show(mean_power(chip.state), Kind::power),
                        current_density(chip.state.current, design.emitters.aperture) * 1e-7,
                        100 * chip.optical_power / chip.electrical_power);
    text += fmt::format("Heat      {} in the chip; junctions {} to {} on average,\n",
                        show(chip.heat, Kind::power), show(coldest, Kind::temperature),
                        show(hottest, Kind::temperature));
    text += fmt::format("          up to {} at the end of a dwell (zone {})\n",
                        show(chip.zone_temperature[chip.hottest_zone], Kind::temperature), chip.hottest_zone);
    text += fmt::format(
        "          light {:.1f} % less at the weakest emitter, {:.1f} % less by the end of a dwell\n",
        100 * chip.droop, 100 * chip.dwell_droop);
    return text;
}

std::string chip_section(const Design& design, const Assessment& assessment) {
    const Packing& packing = assessment.packing;
    const FiringPlan& plan = assessment.plan;
    std::string text = fmt::format(
        "Chip      {} emitters of {}, {:.0f} per mm2, {:.1f} % fill\n", assessment.array.size(),
        show_quantity(design.emitters.aperture, Kind::length), packing.density * 1e-6, 100 * packing.fill);
    if (assessment.dots)
        text += fmt::format(
            "Dots      {} apart at least, {:.0f} % as dense as a hexagonal lattice could be,\n          "
            "{:.0f} % with a neighbourhood of its own "
            "along the line to the receiver\n",
            show_quantity(assessment.dots->nearest, Kind::length), 100 * assessment.dots->share_of_hexagonal,
            100 * assessment.dots->uniqueness);
    text += fmt::format("Firing    {} in {} of {}, frame {}, {:.3g} Hz\n",
                        counted(assessment.array.zones, "zone"), counted(plan.dwells(), "dwell"),
                        counted(plan.shots, "shot"), show_quantity(plan.frame_period, Kind::time),
                        1 / plan.frame_period);
    text += fmt::format("          order: spacing {:.2f}, heat {:.3f}, exposure {:.2f}; smaller is better\n",
                        assessment.order.spacing, assessment.order.heat, assessment.order.exposure);
    text += fmt::format(
        "Power     {} peak, {} average, optical, at the chip\n",
        show_quantity(assessment.beams.emitted / assessment.array.zones * plan.zones_at_once, Kind::power),
        show_quantity(assessment.average_power, Kind::power));
    text += drive_lines(design, assessment);
    for (const Loss& loss : assessment.beams.losses)
        text += fmt::format("          {:.1f} % lost {}\n", 100 * loss.power / assessment.beams.emitted,
                            loss.name);
    text += fmt::format("Points    {} of {} pixels\n", assessment.points.size(),
                        design.receiver.pixels.columns * design.receiver.pixels.rows);
    return text;
}

}  // namespace

std::string verdict_text(const Design& design, const Assessment& assessment) {
    std::string text = wrapped(caution_paragraph, page_width) + "\n";
    if (!design.name.empty()) text += design.name + "\n\n";
    text += chip_section(design, assessment) + "\n" + safety_section(assessment.safety) + "\n";
    if (!assessment.requirements.empty()) text += requirement_table(assessment) + "\n";
    for (const std::string& finding : assessment.findings) text += wrapped(finding, page_width);
    if (!assessment.requirements.empty())
        text += assessment.all_met() ? "\nEvery requirement is met.\n" : "\nNOT every requirement is met.\n";
    return text;
}

}  // namespace glint
