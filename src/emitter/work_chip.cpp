// A whole chip worked through: state, drivers, sums over the array, and what is out of the ordinary.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/quantity.h>
#include <glint/emitter/chip.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>
#include <limits>

namespace glint {
namespace {

std::string show(double value, Kind kind) { return show_quantity(value, kind); }

// The loop of the heaviest channel: its emitters lie side by side.
DriveLoop loop_of(const DriverSettings& driver, const DiodeModel& diode, const DriverLoad& load,
                  double current) {
    const double side_by_side = std::max(1.0, load.channel_current / current);
    return {.inductance = driver.loop_inductance,
            .resistance = driver.loop_resistance + diode.resistance / side_by_side,
            .voltage = diode.voltage};
}

void work_ramp(DriverState& state, const Design& design, const FiringPlan& plan, double duty,
               const DriveLoop& loop, std::vector<std::string>& findings) {
    const DriverSettings& driver = design.drive.driver;
    const double current = state.load.channel_current;
    const double asked = driver.rise_time.value_or(design.drive.pulse_width / 3);
    const double needed = ramp_voltage(loop, current, asked);
    state.supply = driver.supply.value_or(needed), state.rise_time = asked;
    if (driver.supply) {
        const std::optional<double> reached = ramp_time(loop, current, *driver.supply);
        state.rise_time = reached.value_or(std::numeric_limits<double>::infinity());
        if (!reached)
            findings.push_back(fmt::format(
                "The supply of {} cannot hold {} in a channel: it takes {}, and {} for a rise within {}.",
                show(*driver.supply, Kind::voltage), show(current, Kind::current),
                show(loop.voltage + current * loop.resistance, Kind::voltage), show(needed, Kind::voltage),
                show(asked, Kind::time)));
        else if (*reached > asked * (1 + 1e-9))
            findings.push_back(fmt::format(
                "The driver cannot make this pulse: {} in a channel takes {} to rise, longer than the {} "
                "asked for. A supply of {}, "
                "a loop of {}, or {} in a channel would do.",
                show(current, Kind::current), show(*reached, Kind::time), show(asked, Kind::time),
                show(needed, Kind::voltage), show(loop.inductance * asked / *reached, Kind::inductance),
                show((*driver.supply - loop.voltage) / (loop.resistance + loop.inductance / asked),
                     Kind::current)));
    }
    state.charge = current * plan.pulse_width;
    state.storage = storage_capacitance(current, plan.shots * plan.pulse_width, driver.droop * state.supply);
    state.electrical_power = state.load.current * state.supply * duty * plan.dwells();
}

void work_resonant(DriverState& state, const Design& design, const FiringPlan& plan, const DriveLoop& loop,
                   std::vector<std::string>& findings) {
    const double fwhm = design.drive.pulse_width, current = state.load.channel_current;
    const std::optional<ChargedCapacitor> capacitor = capacitor_for(loop, fwhm, current);
    if (!capacitor) {
        // As for the undamped capacitor: (R/2) sqrt(C/L) with sqrt(L C) = 1.5 fwhm/pi. 0.3: see Discharge.
        const double damping = loop.resistance / 2 * 1.5 * fwhm / pi / loop.inductance;
        findings.push_back(fmt::format(
            "A resonant driver cannot make this pulse: {} in a loop of {} and {} does not swing. A loop of "
            "{} would, or a pulse of "
            "{}.",
            show(fwhm, Kind::time), show(loop.inductance, Kind::inductance),
            show(loop.resistance, Kind::resistance), show(loop.inductance * damping / 0.3, Kind::inductance),
            show(fwhm * 0.3 / damping, Kind::time)));
        state.supply = design.drive.driver.supply.value_or(0);
        return;
    }
    const Discharge pulse = discharge(loop, capacitor->capacitance, capacitor->voltage);
    state.storage = capacitor->capacitance, state.rise_time = pulse.rise_time, state.damping = pulse.damping;
    state.charge = pulse.charge;
    const std::optional<double> given = design.drive.driver.supply;
    state.supply = given.value_or(capacitor->voltage);
    if (given && *given < capacitor->voltage * (1 - 1e-9))
        findings.push_back(
            fmt::format("The driver cannot make this pulse: {} at {} half maximum needs {} on the capacitor, "
                        "the supply has {}. A loop "
                        "of less inductance or a longer pulse would do.",
                        show(current, Kind::current), show(fwhm, Kind::time),
                        show(capacitor->voltage, Kind::voltage), show(*given, Kind::voltage)));
    if (pulse.damping > 0.3)
        findings.push_back(
            fmt::format("The resonant loop is damped to {:.2f}, above 0.3: much of the energy stays in its "
                        "resistance (common practice, no "
                        "source).",
                        pulse.damping));
    state.electrical_power =
        pulse.supply_energy * plan.shots * plan.dwells() / plan.frame_period * state.load.channels;
}

void note_drive(const Design& design, const ChipState& state, const DiodePreset& diode,
                std::vector<std::string>& findings) {
    const double density = current_density(state.current, design.emitters.aperture) * 1e-7;  // kA/cm2
    const bool short_pulses = design.drive.pulse_width < 5e-9;
    const double usual = short_pulses ? 150 : 20;
    if (density > usual)
        findings.push_back(fmt::format(
            "The current density of {:.0f} kA/cm2 is above what {} stand for long, {:.0f} kA/cm2 (common "
            "practice, no source). "
            "Wear-out goes about as the square of the current density.",
            density, short_pulses ? "apertures under pulses below 5 ns" : "apertures under longer pulses",
            usual));
    double hottest = 0;
    for (const EmitterState& emitter : state.emitters)
        hottest = std::max(hottest, emitter.average_temperature);
    // exp(Ea/k (1/T1 - 1/T2)) with 0.7 eV, from memory.
    const double rated = zero_celsius + 85, faster = std::exp(0.7 / 8.617e-5 * (1 / rated - 1 / hottest));
    if (hottest > rated)
        findings.push_back(
            fmt::format("The hottest junction averages {}: wear-out is about {:.1f} times as fast as at 85 "
                        "degC (0.7 eV, common practice, no "
                        "source).",
                        show(hottest, Kind::temperature), faster));
    if (diode.outside_fit)
        findings.push_back(
            "The diode lies outside the range of the fits that its numbers come from "
            "(3 um to 20 um, 850 nm to 940 nm, 1 to 8 junctions): give measured ones.");
}

void note_matrix(Chip& chip, const Design& design) {
    const DiodeModel& diode = chip.model.diode.model;
    const double across = diode.voltage + chip.state.current * diode.resistance;
    const HalfSelected half = half_selected(across, MatrixBias::half, design.emitters.diode.junctions);
    chip.driver.half_selected = half;
    if (half.dark()) return;
    chip.findings.push_back(fmt::format(
        "Half-selected emitters of the matrix see {}, above the {} at which they begin to shine; at a third "
        "of "
        "the voltage they would see {}.",
        show(half.voltage, Kind::voltage), show(half.limit, Kind::voltage), show(across / 3, Kind::voltage)));
}

}  // namespace

Chip work_chip(const Design& design, const EmitterArray& array, const FiringPlan& plan) {
    Chip chip{.model = chip_model(design, array, plan)};
    const DriveSettings& drive = design.drive;
    chip.state = drive.by == DriveBy::power ? chip_state_for_power(chip.model, drive.peak_power)
                                            : chip_state(chip.model, drive.current);
    if (!chip.state.settled)
        throw Error(Problem{.what = fmt::format("the chip does not settle below {}: thermal runaway",
                                                show(runaway_temperature, Kind::temperature)),
                            .accepted = "less current, a lower duty or better cooling",
                            .path = "drive/current"});

    chip.zone_temperature.assign(static_cast<std::size_t>(array.zones), 0.0);
    chip.zone_wavelength.assign(static_cast<std::size_t>(array.zones), 0.0);
    const ZoneMembers members = members_of(array);
    double weakest = 1e300, most = 0;
    for (std::size_t i = 0; i < array.size(); ++i) {
        const EmitterState& emitter = chip.state.emitters[i];
        const int zone = array.zone_of[i];
        chip.zone_temperature[zone] = std::max(chip.zone_temperature[zone], emitter.last_temperature);
        const double middle = (emitter.average_temperature + emitter.last_temperature) / 2;
        const double drift = design.emitters.heat.wavelength_drift * (middle - (zero_celsius + 25));
        chip.zone_wavelength[zone] += (design.emitters.wavelength + drift) / members.count(zone);
        chip.electrical_power += chip.model.duty * chip.state.current * emitter.voltage;
        chip.optical_power += chip.model.duty * emitter.power;
        chip.heat += chip.model.duty * emitter.heat;
        weakest = std::min(weakest, emitter.power), most = std::max(most, emitter.power);
        if (emitter.first_power > 0)
            chip.dwell_droop = std::max(chip.dwell_droop, 1 - emitter.last_power / emitter.first_power);
    }
    chip.droop = most > 0 ? 1 - weakest / most : 0;
    chip.hottest_zone =
        static_cast<int>(std::ranges::max_element(chip.zone_temperature) - chip.zone_temperature.begin());
    if (!(most > 0))
        throw Error(Problem{
            .what = fmt::format("{} is below the threshold of every emitter: no light",
                                show(chip.state.current, Kind::current)),
            .accepted = fmt::format("more than {}", show(chip.model.diode.model.threshold, Kind::current)),
            .path = "drive/current"});

    chip.driver.load = peak_load(design.emitters.addressing.scheme, array, plan, chip.state.current);
    const DriveLoop loop =
        loop_of(drive.driver, chip.model.diode.model, chip.driver.load, chip.state.current);
    if (drive.driver.kind == DriverKind::ramp)
        work_ramp(chip.driver, design, plan, chip.model.duty, loop, chip.findings);
    else
        work_resonant(chip.driver, design, plan, loop, chip.findings);
    note_drive(design, chip.state, chip.model.diode, chip.findings);
    if (chip.dwell_droop > 0.1)
        chip.findings.push_back(fmt::format("The light of an emitter falls by up to {:.0f} % within a dwell.",
                                            100 * chip.dwell_droop));
    if (design.emitters.addressing.scheme == AddressingScheme::matrix) note_matrix(chip, design);
    return chip;
}

Lit light_up(const Design& design, const EmitterArray& array, const Chip* chip, double EmitterState::*power) {
    Lit lit{design, array};
    DriveSettings& drive = lit.design.drive;
    if (chip != nullptr) {
        double sum = 0;
        for (const EmitterState& emitter : chip->state.emitters) sum += emitter.*power;
        drive.peak_power = sum / static_cast<double>(array.size());
        for (const EmitterState& emitter : chip->state.emitters)
            lit.array.relative_power.push_back(emitter.*power / drive.peak_power);
    }
    drive.peak_power *= equivalent_width(drive.shape, 1);
    return lit;
}

}  // namespace glint
