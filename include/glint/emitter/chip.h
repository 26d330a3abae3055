// The chip at work: current, light, heat and drivers under the firing plan of a design.
#pragma once

#include <glint/design/design.h>
#include <glint/emitter/array.h>
#include <glint/emitter/chip_heat.h>
#include <glint/emitter/diode.h>
#include <glint/emitter/driver.h>
#include <glint/emitter/firing.h>
#include <optional>
#include <string>
#include <vector>

namespace glint {

/// The diode of a design: the fits to its aperture, with what the design gives in their place.
[[nodiscard]] DiodePreset diode_of(const Emitters& emitters);

/// The substrate of a design.
[[nodiscard]] Substrate substrate_of(const HeatSettings& heat);

/// What does not change with the current: how a chip heats itself under a firing plan.
struct ChipModel {
    DiodePreset diode;
    Substrate substrate;
    HeatCoupling coupling;
    double sink_temperature = 0;  ///< [K]
    double self_resistance = 0;   ///< of the steady average [K/W]
    double duty = 0;              ///< average over peak power of an emitter
    /// [n] rise at the end of a dwell above the average of the frame, per watt of each emitter's heat in a
    /// pulse [K/W]: by itself and by the emitters that fire with it. From superposed step responses of
    /// rectangular pulses with the peak and the energy of the real ones.
    std::vector<double> dwell_rise;
};
[[nodiscard]] ChipModel chip_model(const Design& design, const EmitterArray& array, const FiringPlan& plan);

/// An emitter under way. Its heat is that of its mean temperature over a dwell, half way up.
struct EmitterState {
    double average_temperature = 0;  ///< over the frame, and at the first pulse of a dwell [K]
    double last_temperature = 0;     ///< at the end of the last pulse of a dwell [K]
    double first_power = 0;          ///< optical, at the first pulse [W]
    double brightest = 0;            ///< optical, at any temperature from the sink's to the last [W]
    double power = 0;                ///< half way up [W]
    double last_power = 0;           ///< at the last [W]
    double voltage = 0;              ///< half way up [V]
    double heat = 0;                 ///< in a pulse, half way up [W]; current * voltage = power + heat
};

struct ChipState {
    double current = 0;  ///< peak, of each emitter [A]
    std::vector<EmitterState> emitters;
    bool settled = false;  ///< false: it runs away
    int iterations = 0;    ///< of the balance of heat
};

/// The chip when every emitter takes a peak current [A], > 0: the lowest balance of light and heat.
[[nodiscard]] ChipState chip_state(const ChipModel& model, double current);

/// The mean peak power of all emitters, half way up a dwell [W].
[[nodiscard]] double mean_power(const ChipState& state);

/// The lowest current at which the mean power is as asked [W]. Error, naming the largest power that the chip
/// reaches and its current, when that is less.
[[nodiscard]] ChipState chip_state_for_power(const ChipModel& model, double power);

/// What the driver of the heaviest channel has to do.
struct DriverState {
    DriverLoad load;
    double supply = 0;     ///< given, or needed [V]
    double rise_time = 0;  ///< reached, or asked for [s]
    double storage = 0;  ///< ramp: capacitance beside a channel for one dwell; resonant: of its capacitor [F]
    double electrical_power = 0;                ///< average, of all channels, drivers included [W]
    double damping = 0;                         ///< resonant: of the loop
    double charge = 0;                          ///< of one pulse in the heaviest channel [C]
    std::optional<HalfSelected> half_selected;  ///< of a matrix, with lines at rest half way
};

/// A chip worked through.
struct Chip {
    ChipModel model;
    ChipState state;
    DriverState driver;
    double electrical_power = 0;  ///< average, of the emitters [W]
    double optical_power = 0;     ///< average [W]
    double heat = 0;              ///< average [W]
    double droop = 0;             ///< across the array: 1 - weakest over strongest emitter
    double dwell_droop = 0;       ///< largest loss of power from the first to the last pulse of a dwell
    int hottest_zone = 0;
    std::vector<double> zone_temperature;  ///< [zones] of the hottest emitter at the end of a dwell [K]
    std::vector<double> zone_wavelength;   ///< [zones] mean over its emitters, half way up a dwell [m]
    std::vector<std::string> findings;     ///< whole sentences
};

/// Works the chip of a design through that is not driven by data_sheet.
/// Errors: a power above the rollover, thermal runaway, those of the diode.
[[nodiscard]] Chip work_chip(const Design& design, const EmitterArray& array, const FiringPlan& plan);

/// A design and its array with the light as it counts from there on: rectangular pulses of the energy of the
/// real ones, their mean peak power in the design, every emitter's share in the array.
struct Lit {
    Design design;
    EmitterArray array;
};

/// With one of the powers of an EmitterState, or that of the data sheet without a chip.
[[nodiscard]] Lit light_up(const Design& design, const EmitterArray& array, const Chip* chip,
                           double EmitterState::*power);

}  // namespace glint
