// The table of units and the conversion of text to SI and back.
#include <glint/core/constants.h>
#include <glint/core/quantity.h>
#include <glint/core/text.h>

#include <fmt/format.h>
#include <array>
#include <charconv>
#include <cmath>

namespace glint {
namespace {

constexpr double degree = pi / 180;

constexpr Unit length_units[] = {{"nm", -9}, {"um", -6}, {"µm", -6}, {"mm", -3},
                                 {"cm", -2}, {"m"},      {"km", 3}};
constexpr Unit angle_units[] = {{"urad", -6}, {"mrad", -3}, {"deg", 0, degree}, {"rad"}};
constexpr Unit solid_angle_units[] = {{"usr", -6}, {"msr", -3}, {"sr"}};
constexpr Unit time_units[] = {{"fs", -15}, {"ps", -12}, {"ns", -9},     {"us", -6},    {"µs", -6},
                               {"ms", -3},  {"s"},       {"min", 0, 60}, {"h", 0, 3600}};
constexpr Unit frequency_units[] = {{"Hz"}, {"kHz", 3}, {"MHz", 6}, {"GHz", 9}};
constexpr Unit power_units[] = {{"nW", -9}, {"uW", -6}, {"µW", -6}, {"mW", -3}, {"W"}, {"kW", 3}};
constexpr Unit energy_units[] = {{"fJ", -15}, {"pJ", -12}, {"nJ", -9}, {"uJ", -6},
                                 {"µJ", -6},  {"mJ", -3},  {"J"}};
constexpr Unit current_units[] = {{"nA", -9}, {"uA", -6}, {"µA", -6}, {"mA", -3}, {"A"}};
constexpr Unit voltage_units[] = {{"uV", -6}, {"mV", -3}, {"V"}, {"kV", 3}};
constexpr Unit resistance_units[] = {{"mohm", -3}, {"ohm"}, {"kohm", 3}};
constexpr Unit inductance_units[] = {{"pH", -12}, {"nH", -9}, {"uH", -6}, {"µH", -6}, {"mH", -3}, {"H"}};
constexpr Unit capacitance_units[] = {{"fF", -15}, {"pF", -12}, {"nF", -9}, {"uF", -6},
                                      {"µF", -6},  {"mF", -3},  {"F"}};
constexpr Unit charge_units[] = {{"pC", -12}, {"nC", -9}, {"uC", -6}, {"µC", -6}, {"mC", -3}, {"C"}};
constexpr Unit temperature_units[] = {{"degC", 0, 1, zero_celsius}, {"K"}};
constexpr Unit thermal_resistance_units[] = {{"K/W"}, {"K/mW", 3}};
constexpr Unit thermal_conductivity_units[] = {{"W/m/K"}};
constexpr Unit slope_efficiency_units[] = {{"W/A"}};
constexpr Unit wavelength_drift_units[] = {{"pm/K", -12}, {"nm/K", -9}, {"m/K"}};
constexpr Unit temperature_difference_units[] = {{"K"}};
constexpr Unit illuminance_units[] = {{"lx"}, {"klx", 3}};
constexpr Unit irradiance_units[] = {{"mW/m2", -3}, {"W/m2"}, {"mW/cm2", 1}, {"kW/m2", 3}, {"W/cm2", 4}};
constexpr Unit radiant_intensity_units[] = {{"mW/sr", -3}, {"W/sr"}, {"kW/sr", 3}};
constexpr Unit ratio_units[] = {{"%", -2}, {""}};

struct KindRow {
    Kind kind;
    std::string_view name;
    std::span<const Unit> units;
};

constexpr std::array<KindRow, 24> kinds{{
    {Kind::length, "length", length_units},
    {Kind::angle, "angle", angle_units},
    {Kind::solid_angle, "solid angle", solid_angle_units},
    {Kind::time, "time", time_units},
    {Kind::frequency, "frequency", frequency_units},
    {Kind::power, "power", power_units},
    {Kind::energy, "energy", energy_units},
    {Kind::current, "current", current_units},
    {Kind::voltage, "voltage", voltage_units},
    {Kind::resistance, "resistance", resistance_units},
    {Kind::inductance, "inductance", inductance_units},
    {Kind::capacitance, "capacitance", capacitance_units},
    {Kind::charge, "charge", charge_units},
    {Kind::temperature, "temperature", temperature_units},
    {Kind::thermal_resistance, "thermal resistance", thermal_resistance_units},
    {Kind::temperature_difference, "temperature difference", temperature_difference_units},
    {Kind::thermal_conductivity, "thermal conductivity", thermal_conductivity_units},
    {Kind::slope_efficiency, "slope efficiency", slope_efficiency_units},
    {Kind::wavelength_drift, "wavelength drift", wavelength_drift_units},
    {Kind::illuminance, "illuminance", illuminance_units},
    {Kind::irradiance, "irradiance", irradiance_units},
    {Kind::radiant_intensity, "radiant intensity", radiant_intensity_units},
    {Kind::ratio, "ratio", ratio_units},
    {Kind::number, "number", {}},
}};

const KindRow& row_of(Kind kind) { return kinds[static_cast<std::size_t>(kind)]; }

bool is_alias(std::string_view symbol) { return symbol.starts_with("µ"); }

// Number of leading characters that form a decimal number; 0 when there is none. No hexadecimal, nan or inf.
std::size_t number_length(std::string_view text) {
    std::size_t i = 0, digits = 0;
    const auto take_digits = [&] {
        while (i < text.size() && text[i] >= '0' && text[i] <= '9') ++i, ++digits;
    };
    if (i < text.size() && (text[i] == '+' || text[i] == '-')) ++i;
    take_digits();
    if (i < text.size() && text[i] == '.') ++i, take_digits();
    if (digits == 0) return 0;
    if (i < text.size() && (text[i] == 'e' || text[i] == 'E')) {
        std::size_t j = i + 1;
        if (j < text.size() && (text[j] == '+' || text[j] == '-')) ++j;
        const std::size_t first = j;
        while (j < text.size() && text[j] >= '0' && text[j] <= '9') ++j;
        if (j > first) i = j;  // otherwise the e belongs to the unit
    }
    return i;
}

// The number scaled by a power of ten, rounded once: "24" and -6 give exactly 24e-6.
double scaled(std::string_view number, int exponent) {
    std::string text(number.starts_with('+') ? number.substr(1) : number);
    if (exponent != 0) {
        const auto e = text.find_first_of("eE");
        int written = 0;
        if (e != std::string::npos) {
            const char* first = text.data() + e + 1;
            if (*first == '+') ++first;
            if (std::from_chars(first, text.data() + text.size(), written).ec != std::errc{}) return HUGE_VAL;
            text.resize(e);
        }
        text += "e" + std::to_string(written + exponent);
    }
    double value = 0;
    const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
    if (error != std::errc{} || end != text.data() + text.size()) return HUGE_VAL;
    return value;
}

const Unit* find_unit(std::span<const Unit> units, std::string_view symbol) {
    for (const Unit& unit : units)
        if (unit.symbol == symbol) return &unit;
    return nullptr;
}

double in_unit(double value, const Unit& unit) {
    return (value - unit.offset) / unit.factor * std::pow(10.0, -unit.exponent);
}

const Unit& plain_unit(std::span<const Unit> units) {
    for (const Unit& unit : units)
        if (unit.exponent == 0 && unit.factor == 1 && unit.offset == 0) return unit;
    return units.back();
}

// The unit in which a value reads best: the largest in which it is at least 1, skipping aliases. Ratios below
// 2 read as percent; temperatures as degC; angles of a degree and more as degrees.
const Unit& best_unit(double value, Kind kind) {
    const auto units = row_of(kind).units;
    if (kind == Kind::ratio) return std::abs(value) <= 2 ? units[0] : units[1];
    if (kind == Kind::temperature) return units[0];
    if (value == 0) return plain_unit(units);
    const Unit* best = &units[0];
    for (const Unit& unit : units) {
        const bool unusual = is_alias(unit.symbol) || unit.symbol == "rad" || unit.symbol == "cm" ||
                             unit.symbol == "min" || unit.symbol == "h" || unit.symbol.ends_with("/cm2");
        // A hair of slack, so that 1 m does not become 1000 mm through rounding.
        if (!unusual && std::abs(in_unit(value, unit)) >= 1 - 1e-12) best = &unit;
    }
    return *best;
}

std::string with_unit(std::string number, const Unit& unit) {
    if (unit.symbol.empty()) return number;
    return number + " " + std::string(unit.symbol);
}

}  // namespace

std::string_view name_of(Kind kind) { return row_of(kind).name; }

std::span<const Unit> units_of(Kind kind) { return row_of(kind).units; }

std::string unit_list(Kind kind) {
    std::string list;
    for (const Unit& unit : units_of(kind)) {
        if (is_alias(unit.symbol)) continue;
        if (!list.empty()) list += ", ";
        list += unit.symbol.empty() ? "no unit" : unit.symbol;
    }
    return list.empty() ? "no unit" : list;
}

ParsedQuantity parse_quantity(std::string_view text, Kind kind) {
    const auto fail = [&](std::string why) { return ParsedQuantity{0, std::move(why)}; };
    const std::string_view whole = trim(text);
    const std::size_t length = number_length(whole);
    if (length == 0) return fail(fmt::format("'{}' is not a number with a unit", whole));
    const std::string_view symbol = trim(whole.substr(length));
    const auto units = units_of(kind);
    const Unit plain{};
    const Unit* unit = units.empty() && symbol.empty() ? &plain : find_unit(units, symbol);
    if (unit == nullptr) {
        if (symbol.empty()) return fail(fmt::format("'{}' lacks a unit", whole));
        for (const KindRow& other : kinds)
            if (find_unit(other.units, symbol) != nullptr)
                return fail(fmt::format("'{}' is a {}, not a {}", whole, other.name, name_of(kind)));
        return fail(fmt::format("unknown unit '{}' in '{}'", symbol, whole));
    }
    const double value = scaled(whole.substr(0, length), unit->exponent) * unit->factor + unit->offset;
    if (!std::isfinite(value)) return fail(fmt::format("'{}' is beyond what a number can hold", whole));
    return {value, {}};
}

std::string format_quantity(double value, Kind kind) {
    const auto units = units_of(kind);
    if (units.empty()) return fmt::format("{}", value);
    const Unit& best = best_unit(value, kind);
    for (int digits = 1; digits <= 17; ++digits) {
        const double rounded = parse_number(fmt::format("{:.{}g}", in_unit(value, best), digits)).value;
        const std::string text = with_unit(fmt::format("{}", rounded), best);
        if (parse_quantity(text, kind).value == value) return text;
    }
    return with_unit(fmt::format("{}", value), plain_unit(units));  // plain SI always reads back exactly
}

std::string show_quantity(double value, Kind kind, int digits) {
    if (units_of(kind).empty()) return fmt::format("{:.{}g}", value, digits);
    // Round first, so that 999.96 mm shows as 1 m and not as 1e+03 mm.
    double rounded = value;
    const std::string text = fmt::format("{:.{}e}", value, digits - 1);
    std::from_chars(text.data(), text.data() + text.size(), rounded);
    const Unit& unit = best_unit(rounded, kind);
    const double number = in_unit(value, unit);
    const int whole = number == 0 ? 1 : static_cast<int>(std::floor(std::log10(std::abs(number)))) + 1;
    if (whole > digits && whole <= 6) return with_unit(fmt::format("{:.0f}", number), unit);
    return with_unit(fmt::format("{:.{}g}", number, digits), unit);
}

}  // namespace glint
