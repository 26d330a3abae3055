// What the safety tables accept: wavelengths, durations and angles, and the checks at their door.
#pragma once

namespace glint {

/// A closed interval in SI units.
struct Interval {
    double from = 0;
    double to = 0;

    bool operator==(const Interval&) const = default;
};

inline constexpr Interval limit_wavelengths{400e-9, 1800e-9};          // m, the bands the tables hold
inline constexpr Interval retinal_wavelengths{400e-9, 1400e-9};        // m, light that reaches the retina
inline constexpr Interval second_limit_wavelengths{1250e-9, 1400e-9};  // m, see second_limit_note
inline constexpr Interval photochemical_wavelengths{400e-9, 600e-9};   // m
inline constexpr Interval limit_durations{1e-13, 3e4};                 // s
inline constexpr Interval limit_subtenses{0, 3.1415927};               // rad, up to a half space

/// True when `x` lies in the interval or within one part in 1e9 of its ends, so that a bound reached by
/// arithmetic (0.35 s as 3.5e-1, 1400 nm as 1400 * 1e-9) belongs to both cells that meet there. The tables
/// then take the smaller of the two.
[[nodiscard]] constexpr bool touches(const Interval& interval, double x) {
    return x >= interval.from * (1 - 1e-9) && x <= interval.to * (1 + 1e-9);
}

/// Throws Error unless `wavelength` [m] is in 400 nm to 1800 nm.
void check_wavelength(double wavelength);

/// Throws Error unless `wavelength` [m] is in 400 nm to 1400 nm, where C4, C6, C7 and T2 are defined.
void check_retinal_wavelength(double wavelength);

/// Throws Error unless `wavelength` [m] is in 400 nm to 600 nm, where C3 is defined.
void check_photochemical_wavelength(double wavelength);

/// Throws Error unless `duration` [s] is in 1e-13 s to 3e4 s.
void check_duration(double duration);

/// Throws Error unless `subtense` [rad] is in 0 to pi.
void check_subtense(double subtense);

/// Throws Error unless `value` is finite and greater than 0; `what` names it in the message.
void check_positive(double value, const char* what);

/// Throws Error unless `value` is finite and not negative; `what` names it in the message.
void check_not_negative(double value, const char* what);

}  // namespace glint
