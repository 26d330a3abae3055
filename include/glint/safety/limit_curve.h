// The limits of one class, wavelength and mechanism, made ready for many durations and subtenses.
#pragma once

#include <glint/safety/class.h>
#include <glint/safety/limit_rows.h>

#include <vector>

namespace glint {

/// The rows that hold, with the factors that depend on the wavelength multiplied in.
struct LimitCurve {
    struct Piece {
        Interval duration;       ///< [s]
        double coefficient = 0;  ///< C3, C4 and C7 included
        double exponent = 0;     ///< of t
        bool C6 = false, T2 = false, watt = false;
        SourceSize source = SourceSize::any;
        Reach reach = Reach::whole;
    };
    Mechanism mechanism = Mechanism::retinal_thermal;
    std::vector<Piece> pieces;  ///< empty where the class has no such limit
    std::vector<double> bends;  ///< [s] durations at which pieces meet, ascending

    /// The limit for a duration [J]: the smallest of the pieces that cover it, as class_limit gives it;
    /// infinite where none does. `subtense` at most alpha_max(duration); `t2` is that of the subtense.
    [[nodiscard]] double energy(double duration, double subtense, double t2) const;
};

/// Rows of a class, as class_limit finds them: Class 2 is Class 1 below 0.25 s, every class has the Class 3B
/// rows as its ceiling. Errors: Class 4; Class 2 and 2M outside 400 nm to 700 nm; wavelength out of range.
[[nodiscard]] LimitCurve limit_curve(LaserClass laser_class, double wavelength, Mechanism mechanism);

}  // namespace glint
