// Quantities with units: text <-> SI.
#pragma once

#include <span>
#include <string>
#include <string_view>

namespace glint {

/// What a number measures. A text of one kind never converts to another kind.
enum class Kind {
    length,
    angle,
    solid_angle,
    time,
    frequency,
    power,
    energy,
    current,
    voltage,
    resistance,
    inductance,
    capacitance,
    charge,
    temperature,
    thermal_resistance,
    temperature_difference,
    thermal_conductivity,
    slope_efficiency,  ///< light over current
    wavelength_drift,
    illuminance,
    irradiance,
    radiant_intensity,
    ratio,   ///< "35 %" or "0.35"
    number,  ///< a pure number, written without a unit
};

/// One accepted unit of a kind: SI value = (written number * 10^exponent) * factor + offset.
struct Unit {
    std::string_view symbol;
    int exponent = 0;   ///< decimal exponent, kept apart so that "24 um" is exactly 24e-6
    double factor = 1;  ///< for units that are no power of ten, e.g. deg
    double offset = 0;  ///< only degC
};

/// "length", "solid angle", ... for messages.
[[nodiscard]] std::string_view name_of(Kind);

/// All units accepted for a kind, smallest first. Empty for Kind::number.
[[nodiscard]] std::span<const Unit> units_of(Kind);

/// "nm, um, mm, cm, m, km" for messages; "no unit" for Kind::number.
[[nodiscard]] std::string unit_list(Kind);

/// Result of reading a quantity: the SI value, or what is wrong with the text.
struct ParsedQuantity {
    double value = 0;
    std::string problem;  ///< empty when `value` is good
};

/// Reads "24 um", "3ns", "35 %" into SI. Refuses a missing unit, a unit of another kind, NaN, infinity,
/// trailing text and numbers that overflow. Decimal point only, whatever the locale.
[[nodiscard]] ParsedQuantity parse_quantity(std::string_view text, Kind kind);

/// Shortest text that parse_quantity reads back to exactly the same double, in the unit that reads best
/// ("24 um", not "2.4e-05 m"). `value` must be finite.
[[nodiscard]] std::string format_quantity(double value, Kind kind);

/// For people: at most `digits` significant digits, same choice of unit, not meant to be read back.
[[nodiscard]] std::string show_quantity(double value, Kind kind, int digits = 3);

}  // namespace glint
