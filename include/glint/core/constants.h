// Physical and mathematical constants, SI.
#pragma once

#include <numbers>

namespace glint {

inline constexpr double pi = std::numbers::pi;
inline constexpr double speed_of_light = 299'792'458.0;  // m/s, exact (SI)
inline constexpr double planck = 6.62607015e-34;         // J s, exact (SI)
inline constexpr double boltzmann = 1.380649e-23;        // J/K, exact (SI)
inline constexpr double zero_celsius = 273.15;           // K

/// Energy of one photon [J] at a vacuum wavelength [m].
[[nodiscard]] constexpr double photon_energy(double wavelength) {
    return planck * speed_of_light / wavelength;
}

[[nodiscard]] constexpr double radians(double degrees) { return degrees * (pi / 180); }
[[nodiscard]] constexpr double degrees(double radians) { return radians * (180 / pi); }

}  // namespace glint
