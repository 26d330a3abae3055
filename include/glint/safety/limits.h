// Accessible emission limits: the short evaluator over the table rows.
#pragma once

#include <glint/safety/class.h>
#include <glint/safety/factors.h>
#include <glint/safety/limit_rows.h>
#include <optional>
#include <span>
#include <string>

namespace glint {

/// One emission as the tables see it.
struct EmissionWindow {
    double wavelength = 0;        ///< m, 400 nm to 1800 nm
    double duration = 0;          ///< s, 1e-13 to 3e4
    double subtense = alpha_min;  ///< rad, 0 to pi; no effect from 1400 nm on
};

/// A limit and the row that set it.
struct Limit {
    double energy = 0;              ///< J for the whole duration
    double power = 0;               ///< W, energy / duration
    const LimitRow* row = nullptr;  ///< the governing row of the constexpr tables; never null in a result
};

/// The smallest of all limits of a class, J and W: every row that covers the emission, both rows where two
/// meet, thermal and photochemical, and never more than the Class 3B limit. Class 1M and 2M have the limits
/// of 1 and 2; Class 2 equals Class 1 below 0.25 s. Throws Error for wavelength, duration or subtense out of
/// range, for Class 2 or 2M outside 400-700 nm, and for Class 4. Source: IEC 60825-1:2014 Tables 3 to 8, see
/// limit_rows.h.
[[nodiscard]] Limit class_limit(LaserClass laser_class, const EmissionWindow& emission);

/// The smallest limit among the rows of one mechanism, or none where the class has no such row. Emission is
/// taken inside another angle of acceptance for each: alpha_max(t) for retinal thermal, its own for
/// photochemical, none for corneal and the Class 3B ceiling. Same errors.
[[nodiscard]] std::optional<Limit> class_limit(LaserClass laser_class, const EmissionWindow& emission,
                                               Mechanism mechanism);

/// An emission with the energy [J] that enters the measurement aperture during it.
struct Emission {
    EmissionWindow window;
    double energy = 0;  ///< J, not negative
};

/// Sums of energy/limit per mechanism: light on the same tissue adds.
struct RatioSums {
    double retinal_thermal = 0;
    double photochemical = 0;
    double corneal = 0;
    double ceiling = 0;

    [[nodiscard]] double largest() const;
};

/// Adds energy/limit of emissions that act together, mechanism by mechanism; 1 is the limit.
/// Source: IEC 60825-1:2014, 4.3 b), from memory.
[[nodiscard]] RatioSums additive_ratios(LaserClass laser_class, std::span<const Emission> emissions);

/// One row in words, from its data: "7.7e-8 C4 C6 J, retinal thermal, 700 nm to 1050 nm, 10 ps to 5 us".
[[nodiscard]] std::string describe(const LimitRow& row);

}  // namespace glint
