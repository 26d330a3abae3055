// What drives the emitters: lines and their loads, the loop's inductance, the capacitor that is discharged.
#pragma once

#include <glint/design/design.h>
#include <glint/emitter/array.h>
#include <glint/emitter/firing.h>
#include <optional>

namespace glint {

/// Resistivity of gold at room temperature, the common metal of lines [ohm m] (from memory).
inline constexpr double gold_resistivity = 2.44e-8;

/// The lines of a chip. A matrix feeds its column lines and returns by its row lines, both switched; every
/// other scheme feeds each zone on its own and returns by one contact that all share.
struct DriverCount {
    int channels = 0;  ///< lines that feed current: the zones, or the column lines of a matrix
    int returns = 0;   ///< lines that take it back: 1, or the row lines of a matrix
    int switches = 0;  ///< lines that need a switch of their own
    int pads = 0;      ///< contacts of the switched lines; the shared return is the back of the chip
};

/// Counts the lines. `ends` is how many ends of every line have a pad: 1, or 2 against its voltage drop.
[[nodiscard]] DriverCount count_drivers(AddressingScheme scheme, const EmitterArray& array, int ends = 1);

/// The heaviest dwell of a frame, for each number by itself.
struct DriverLoad {
    int emitters = 0;            ///< that fire together
    int channels = 0;            ///< lines that feed them
    int returns = 0;             ///< lines that take the current back
    double channel_current = 0;  ///< largest of one feeding line [A]
    double return_current = 0;   ///< largest of one return [A]: in a matrix all fired emitters of a row line
    double current = 0;          ///< largest of the chip [A]
};

/// Peak currents when every emitter of a fired zone takes `emitter_current` [A], >= 0. The plan must be that
/// of plan_firing for this array: it has refused the sets of zones that a matrix cannot fire (anything but
/// all crossings of some rows with some columns).
[[nodiscard]] DriverLoad peak_load(AddressingScheme scheme, const EmitterArray& array, const FiringPlan& plan,
                                   double emitter_current);

/// Resistance of a metal line [ohm]: resistivity * length / (width * thickness); ohm m and m, all > 0.
[[nodiscard]] double line_resistance(double resistivity, double length, double width, double thickness);

/// Voltage drop [V] at the far end of a line whose current [A] leaves it evenly along its length: I R / 2;
/// I R / 8 in its middle when both `ends` are fed.
[[nodiscard]] double line_drop(double current, double resistance, int ends = 1);

/// What a half-selected emitter of a matrix sees of the voltage across a selected one: a half when unselected
/// lines rest half way, a third when unselected rows and columns rest at one and two thirds.
enum class MatrixBias { half, third };

/// A half-selected emitter of a matrix.
struct HalfSelected {
    double voltage = 0;  ///< it sees [V]
    double limit = 0;    ///< below which it stays dark [V]: 1.3 V a junction (from memory)
    [[nodiscard]] bool dark() const { return voltage < limit; }
};
[[nodiscard]] HalfSelected half_selected(double emitter_voltage, MatrixBias bias, int junctions);

/// The current loop through switch, supply and emitters.
struct DriveLoop {
    double inductance = 0;  ///< [H], > 0
    double resistance = 0;  ///< of the whole loop, emitters included [ohm], >= 0
    double voltage = 0;     ///< of the emitters at zero current [V], >= 0
};

/// Inductance [H] of a strip over a plane: mu0 * height * length / width, for height << width; all > 0 [m].
[[nodiscard]] double plate_inductance(double height, double length, double width);

/// Supply voltage [V] at which the current still climbs straight when it reaches `current` [A] after
/// `rise_time` [s], > 0: V + I R + L I / t.
[[nodiscard]] double ramp_voltage(const DriveLoop& loop, double current, double rise_time);

/// Time [s] from 0 to `current` [A] on this supply [V]: L I / (supply - V - I R), the slowest slope of the
/// climb taken for all of it, so never too short. None when the supply cannot hold this current.
[[nodiscard]] std::optional<double> ramp_time(const DriveLoop& loop, double current, double supply);

/// Voltage a storage capacitor [F] loses in a rectangular pulse [V]: I t / C.
[[nodiscard]] double droop(double current, double pulse_width, double capacitance);

/// Capacitance [F] that loses `droop` [V], > 0, in a rectangular pulse: I t / droop.
[[nodiscard]] double storage_capacitance(double current, double pulse_width, double droop);

/// One half wave of a capacitor discharged into the loop; the emitters block the way back.
struct Discharge {
    double peak = 0;                   ///< current [A]
    double peak_time = 0;              ///< [s]
    double base = 0;                   ///< length of the pulse [s]
    double fwhm = 0;                   ///< [s]
    double rise_time = 0;              ///< from 10 to 90 % of the peak [s]
    double charge = 0;                 ///< [C]
    double damping = 0;                ///< (R/2) sqrt(C/L), below 1; keep below 0.3 (from memory)
    double end_voltage = 0;            ///< left on the capacitor, mostly negative [V]
    double supply_energy = 0;          ///< to charge it again from there [J]
    double supply_energy_clamped = 0;  ///< when a clamp has brought it up to 0 V first [J]
};

/// With V = start - loop voltage, a = R/2L and w = sqrt(1/LC - a^2) the current is i = V/(w L) exp(-a t)
/// sin(w t) for 0 <= t <= pi/w (the textbook series circuit). The supply, at `start_voltage`, gives the lost
/// charge back through a resistor or a current source: energy = start * charge, or C start^2 from 0 V.
/// `capacitance` [F] > 0, `start_voltage` [V] above that of the loop. Error also: damping of 1 or more.
[[nodiscard]] Discharge discharge(const DriveLoop& loop, double capacitance, double start_voltage);

/// A capacitor and its voltage.
struct ChargedCapacitor {
    double capacitance = 0;  ///< [F]
    double voltage = 0;      ///< [V]
};

/// The capacitor whose discharge has this FWHM [s] and peak current [A], both > 0. Without resistance
/// C = (1.5 FWHM / pi)^2 / L and voltage = V + peak sqrt(L/C); resistance is allowed for.
/// None for a pulse so long that this loop would be damped to 1 or more.
[[nodiscard]] std::optional<ChargedCapacitor> capacitor_for(const DriveLoop& loop, double fwhm, double peak);

/// Energy over peak power [s]: the width of the rectangular pulse of the same energy and peak. In units of
/// the FWHM: 1, 3/pi = 0.955 and sqrt(pi / (4 ln 2)) = 1.064.
[[nodiscard]] double equivalent_width(PulseShape shape, double fwhm);

/// Time from 10 to 90 % of the peak [s]. In units of the FWHM: 0, 0.487 and 0.716.
[[nodiscard]] double rise_time(PulseShape shape, double fwhm);

}  // namespace glint
