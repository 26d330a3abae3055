// The light-current-voltage model of one surface-emitting laser diode, with thermal rollover.
#pragma once

#include <optional>

namespace glint {

/// Temperatures of the model end here: a diode that has not settled below it runs away [K].
inline constexpr double runaway_temperature = 1000;

/// One laser diode of one or more junctions in series. Every number can be replaced by a measured one.
/// threshold(T) = threshold * (1 + ((T - threshold_best_temperature) / threshold_width)^2)
/// slope(T)     = slope * max(0, 1 - (T - reference) / slope_fall)
/// The same idea (a threshold and an efficiency that depend on temperature): Mena et al. 1999, Baveja et al.
/// 2011.
struct DiodeModel {
    int junctions = 1;                        ///< 1 or more; the other numbers are of all of them together
    double threshold = 0;                     ///< lowest threshold current [A], > 0
    double threshold_best_temperature = 300;  ///< where it is lowest: the gain peak meets the cavity [K]
    double threshold_width = 90;              ///< it is twice as high this far from there [K], > 0
    double slope = 0;                         ///< at `reference` [W/A], > 0
    double slope_fall = 230;                  ///< the slope is 0 this far above `reference` [K], > 0
    double voltage = 0;             ///< at zero current and `reference`, tunnel junctions included [V], > 0
    double voltage_per_kelvin = 0;  ///< [V/K]; -1 to -2 mV/K a junction (from memory)
    double resistance = 0;          ///< in series [ohm], >= 0
    double reference = 298.15;      ///< temperature of slope and voltage [K], > 0
};

/// What a diode does at one current and junction temperature. current * voltage = power + heat.
struct Operation {
    double current = 0;      ///< [A]
    double temperature = 0;  ///< of the junction [K]
    double power = 0;        ///< optical [W], 0 below threshold
    double voltage = 0;      ///< [V]
    double heat = 0;         ///< [W]
    double threshold = 0;    ///< threshold current at this temperature [A]
    double slope = 0;        ///< dP/dI at this temperature [W/A]

    /// Optical over electrical power; 0 at zero current.
    [[nodiscard]] double efficiency() const { return current > 0 ? power / (current * voltage) : 0; }
};

/// The diode at a current [A], >= 0, and a junction temperature [K], above 0 and up to runaway_temperature.
/// Errors: a model or argument out of range; a slope above the voltage, which would give more light than the
/// electrical power (far below `reference`, where the straight line of the slope no longer holds).
[[nodiscard]] Operation operate(const DiodeModel& model, double current, double temperature);

/// Where a diode settles.
struct Steady {
    Operation at;
    bool runaway = false;  ///< it does not settle below runaway_temperature; `at` is taken there
};

/// Where the diode settles on its way up from the base: the LOWEST root of
///     T = base + thermal_resistance * heat(current, T).
/// `thermal_resistance` [K/W], >= 0, may also be the thermal impedance at the end of a pulse.
/// Errors: as for operate, at the base temperature.
[[nodiscard]] Steady steady(const DiodeModel& model, double current, double base_temperature,
                            double thermal_resistance);

/// The two best points of a diode on one base and thermal resistance.
struct Rollover {
    Operation largest_power;    ///< zero current when the diode never reaches its threshold
    Operation best_efficiency;  ///< largest power over electrical power
};

/// The largest power and efficiency over all currents at which the diode settles. Their currents are good to
/// about 1e-7, as at any flat maximum. A second maximum that is narrower than 1/160 of the range from
/// threshold to the end of light, in equal ratios, may be missed; the equations have none at usual values.
/// `thermal_resistance` > 0: without it, power has no largest value.
[[nodiscard]] Rollover rollover(const DiodeModel& model, double base_temperature, double thermal_resistance);

/// The lowest current [A] that settles at `power` [W], >= 0; none when that is above the rollover.
[[nodiscard]] std::optional<double> current_for_power(const DiodeModel& model, double power,
                                                      double base_temperature, double thermal_resistance);

/// A model from fits, for an early design.
struct DiodePreset {
    DiodeModel model;
    bool outside_fit = false;  ///< an argument lies outside the range of the fits
};

/// Fits for oxide apertures of 3 to 20 um, 850 to 940 nm and 1 to 8 junctions; beyond, they still compute.
/// `aperture` is its diameter d [m], `wavelength` that of vacuum [m], both > 0; N is `junctions`, >= 1.
/// - threshold 0.1 + 0.008 d^2 in mA and um. Chosen to pass through 0.9 mA at 10 um (Al-Omari, Lear, c.
///   2005); the same for every N.
/// - resistance 10 + 250/d + 3000/d^2 in ohm and um, times 1 + 0.25 (N - 1). Chosen to pass through 65 ohm at
///   10 um (Al-Omari, Lear, c. 2005); mirrors and contacts are shared, so it grows slower than N.
/// - slope N times 1.0, 1.0 and 1.17 W/A at 850, 905 and 940 nm, straight lines between: the first two from
///   memory, the third of C. Wang et al. 2022.
/// - voltage N times 1.45, 1.55 and 1.55 V, and 0.1 V for each tunnel junction: the first of Al-Omari, Lear,
///   the others chosen within 1.45 to 1.6 V, from memory.
/// - slope falls to 0 in 230 K, threshold is lowest at 300 K and twice as high 90 K away: all chosen so that
///   10 um, 940 nm and one junction roll over at 13.5 mW (C. Wang et al. 2022).
[[nodiscard]] DiodePreset diode_preset(double aperture, double wavelength, int junctions);

/// Photons out per electron in and junction, above threshold: slope * wavelength * e / (h c junctions). A
/// model that gives more than 1 is wrong.
[[nodiscard]] double quantum_efficiency(const DiodeModel& model, double wavelength);

/// Current per area of a round aperture of this diameter [A/m2].
[[nodiscard]] double current_density(double current, double aperture);

}  // namespace glint
