// Round numbers on linear and logarithmic axes, and numbers as text.
#include <glint/core/error.h>
#include <glint/core/text.h>
#include <glint/report/ticks.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>

namespace glint {

namespace {

/// 10^n, exact where a double can be: pow(10, -3) need not be 1e-3 on every machine, 1 / 1000 is.
double power_of_ten(int n) {
    double power = 1;
    for (int i = 0; i < std::abs(n); ++i) power *= 10;
    return n < 0 ? 1 / power : power;
}

/// floor(log10(value)), right at powers of ten.
int decade_of(double value) {
    int decade = static_cast<int>(std::floor(std::log10(value)));
    if (power_of_ten(decade + 1) <= value) ++decade;
    if (power_of_ten(decade) > value) --decade;
    return decade;
}

/// The bounds keep powers of ten and counts of steps within what a double holds exactly.
void require_range(double low, double high, bool positive) {
    const double largest = std::max(std::abs(low), std::abs(high));
    const bool good = low < high && largest < 1e290 && high - low > 1e-12 * largest && high - low > 1e-290;
    if (good && (!positive || low > 1e-290)) return;
    throw Error(Problem{.what = fmt::format("an axis cannot run from {} to {}", low, high),
                        .accepted = positive ? "two finite numbers above 0, the lower first and well apart"
                                             : "two finite numbers, the lower first and well apart"});
}

/// "-1234.50" with a true minus sign and thin spaces between thousands (from five digits on).
std::string spaced(double value, int decimals) {
    std::string digits = fmt::format("{:.{}f}", std::abs(value), decimals);
    const std::size_t whole = std::min(digits.find('.'), digits.size());
    if (whole > 4)
        for (std::size_t at = whole; at > 3; at -= 3) {
            if (at - 3 > 0) digits.insert(at - 3, "\u2009");
        }
    const bool zero = digits.find_first_of("123456789") == std::string::npos;
    return value < 0 && !zero ? "\u2212" + digits : digits;
}

/// Plain decimals, or powers of ten (but "1" and "10").
std::string decade_text(int mantissa, int decade, bool powers) {
    if (!powers || decade == 0 || (decade == 1 && mantissa == 1))
        return spaced(mantissa * power_of_ten(decade), std::max(0, -decade));
    return mantissa == 1 ? power_text(decade) : fmt::format("{}×{}", mantissa, power_text(decade));
}

}  // namespace

std::string power_text(int exponent) {
    constexpr const char* raised[] = {"⁰", "¹", "²", "³", "⁴", "⁵", "⁶", "⁷", "⁸", "⁹"};
    std::string text = exponent < 0 ? "10⁻" : "10";
    for (const char digit : std::to_string(std::abs(exponent))) text += raised[digit - '0'];
    return text;
}

Ticks round_ticks(double low, double high, int about) {
    require_range(low, high, false);
    if (about < 1) throw Error(Problem{.what = "an axis was asked for no marks", .accepted = "at least 1"});
    const double rough = (high - low) / about;
    const int decade = decade_of(rough);
    // The nearest of 1, 2, 5, 10 on a logarithmic scale.
    const double mantissa = rough / power_of_ten(decade);
    const int digit = mantissa < std::sqrt(2.0)    ? 1
                      : mantissa < std::sqrt(10.0) ? 2
                      : mantissa < std::sqrt(50.0) ? 5
                                                   : 10;
    const int step_decade = digit == 10 ? decade + 1 : decade;
    const int step_digit = digit == 10 ? 1 : digit;
    // Whole multiples of the digit times a power of ten keep the values exact decimals.
    const auto value_at = [&](double multiple, int per_digit) {
        const double scaled = multiple * step_digit / per_digit;
        return step_decade < 0 ? scaled / power_of_ten(-step_decade) : scaled * power_of_ten(step_decade);
    };
    const double step = value_at(1, 1), slack = 1e-9 * step;
    Ticks ticks;
    const double largest = std::max(std::abs(low), std::abs(high));
    if (largest >= 1e6 || largest < 1e-3)
        ticks.exponent = static_cast<int>(std::floor(decade_of(largest) / 3.0)) * 3;
    const int decimals = std::max(0, ticks.exponent - step_decade);
    for (double k = std::ceil((low - slack) / step); value_at(k, 1) <= high + slack; ++k) {
        const double value = value_at(k, 1) + 0.0;  // never minus zero
        ticks.values.push_back(value);
        ticks.labels.push_back(spaced(value / power_of_ten(ticks.exponent), decimals));
    }
    const int parts = step_digit == 2 ? 4 : 5;
    for (double k = std::ceil((low - slack) / step * parts); value_at(k, parts) <= high + slack; ++k)
        if (std::fmod(k, parts) != 0) ticks.minor.push_back(value_at(k, parts));
    return ticks;
}

Ticks decade_ticks(double low, double high, int about) {
    require_range(low, high, true);
    if (high / low < 10) return round_ticks(low, high, about);
    const double lowest = low * (1 - 1e-9), highest = high * (1 + 1e-9);
    const int first = decade_of(low), last = decade_of(high * (1 + 1e-9));
    const int decades = last - first + 1;
    const double span = std::log10(high / low);
    // Numbers on 1, 2, 5 when whole decades alone would leave the axis bare.
    const bool parts_named = span * 3 <= std::max(about, 4) && span < 2.5;
    const int every = std::max(1, static_cast<int>(std::ceil(span / std::max(1, about))));
    const bool powers = low < 0.9e-3 || high > 2e4;
    Ticks ticks;
    for (int i = 0; i < decades; ++i) {
        const int decade = first + i;
        for (int digit = 1; digit <= 9; ++digit) {
            const double value = decade < 0 ? digit / power_of_ten(-decade) : digit * power_of_ten(decade);
            if (value < lowest || value > highest) continue;
            const bool named = digit == 1 ? decade % every == 0 : parts_named && (digit == 2 || digit == 5);
            if (named) {
                ticks.values.push_back(value);
                ticks.labels.push_back(decade_text(digit, decade, powers));
            } else if (digit == 1 || every == 1) {
                ticks.minor.push_back(value);
            }
        }
    }
    return ticks;
}

std::string number_text(double value, int digits) {
    if (!std::isfinite(value)) return "no value";
    if (value == 0) return "0";
    const std::string scientific = fmt::format("{:.{}e}", std::abs(value), digits - 1);
    const std::size_t mark = scientific.find('e');
    const int decade = static_cast<int>(parse_number(scientific.substr(mark + 1)).value);
    if (decade >= -3 && decade <= 5) {
        const double rounded = parse_number(scientific).value;
        std::string text = spaced(value < 0 ? -rounded : rounded, std::max(0, digits - 1 - decade));
        if (text.find('.') != std::string::npos) {
            text.erase(text.find_last_not_of('0') + 1);
            if (text.back() == '.') text.pop_back();
        }
        return text;
    }
    std::string mantissa = scientific.substr(0, mark);
    if (mantissa.find('.') != std::string::npos) {
        mantissa.erase(mantissa.find_last_not_of('0') + 1);
        if (mantissa.back() == '.') mantissa.pop_back();
    }
    return (value < 0 ? "\u2212" : "") + mantissa + " × " + power_text(decade);
}

}  // namespace glint
