// Limits and factors of Class 1, retinal thermal, written a second time from the printed tables.
#pragma once

namespace glint::test {

inline constexpr double smallest_side = 1.5e-3;  ///< alpha_min [rad]
inline constexpr double equal_share = 1e-9;  ///< by which times and sides may differ and still be the same

/// Ti [s]: 5 us below 1050 nm, 13 us from there on. `wavelength` 400 nm to below 1400 nm, for all that
/// follows [m].
[[nodiscard]] double brute_Ti(double wavelength);
/// T2 [s] of a subtense [rad]: 10 s to 100 s.
[[nodiscard]] double brute_T2(double subtense);
/// alpha_max [rad] of a duration [s].
[[nodiscard]] double brute_alpha_max(double duration);
/// The shortest duration [s] with alpha_max of at least `side` [rad]: 0 up to 5 mrad; `side` up to 100 mrad.
[[nodiscard]] double brute_shortest(double side);
/// C5 for N pulses of one width [s].
[[nodiscard]] double brute_C5(double wavelength, double pulse_width, double subtense, double N,
                              double time_base);

/// The cells of one wavelength.
struct BruteCells {
    double Ti = 0;      ///< [s]
    double flat = 0;    ///< limit of a point up to Ti [J]
    double rising = 0;  ///< limit of a point from Ti to 10 s, times t^0.75 [J/s^0.75]
    double watt = 0;    ///< limit of a point from 10 s on [W]
};
[[nodiscard]] BruteCells brute_cells(double wavelength);

/// Limit [J] for a duration of 1e-11 s or more and a subtense of at most alpha_max(duration).
[[nodiscard]] double brute_limit(const BruteCells& cells, double duration, double subtense);

}  // namespace glint::test
