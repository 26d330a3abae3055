// Round numbers to mark on an axis.
#pragma once

#include <string>
#include <vector>

namespace glint {

enum class Spacing { linear, logarithmic };

/// Marks of an axis, ascending, all inside the range.
struct Ticks {
    std::vector<double> values;       ///< where a number stands
    std::vector<std::string> labels;  ///< its text, one for each value
    std::vector<double> minor;        ///< short marks between, without numbers
    int exponent = 0;                 ///< labels are values / 10^exponent (linear spacing only)
};

/// Marks at 1, 2 or 5 times a power of ten in [low, high], about `about` of them: their step is within a
/// factor of 1.6 of (high - low) / about. Labels have just the decimals they need, a true minus sign and thin
/// spaces between thousands; when all are small or some are large (below 10^-3, from 10^6) they share a power
/// of ten, a multiple of 3. Error unless low < high, both below 1e290 in size and apart by more than 1e-12 of
/// it, and about >= 1.
[[nodiscard]] Ticks round_ticks(double low, double high, int about);

/// Marks of a logarithmic axis: whole powers of ten, every n-th when they are many more than `about`; also 2
/// and 5 times them when they are few; as round_ticks when the range is below a factor of 10. Error as
/// round_ticks, and unless low > 0.
[[nodiscard]] Ticks decade_ticks(double low, double high, int about);

/// A number for people: at most `digits` significant digits, true minus sign, "1.2 × 10⁻⁷" when plain
/// notation is long.
[[nodiscard]] std::string number_text(double value, int digits = 3);

/// "10⁻⁷".
[[nodiscard]] std::string power_text(int exponent);

}  // namespace glint
