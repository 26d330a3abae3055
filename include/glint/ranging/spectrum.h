// Background light: irradiance in the filter's band from an illuminance.
#pragma once

#include <glint/design/design.h>

namespace glint {

/// Irradiance of ASTM G173-03 global sunlight (air mass 1.5, 37 degree tilt) in a band [W/m2]. 400 to 1700
/// nm.
[[nodiscard]] double sun_band_irradiance(double low, double high);

/// Illuminance of that sunlight [lx]: 683 lm/W times its integral with V(lambda); 109.5 klx.
[[nodiscard]] double sun_illuminance();

/// Irradiance in a band of a Planckian lamp of a colour temperature that gives one lux [W/m2/lx].
[[nodiscard]] double lamp_band_irradiance(double colour_temperature, double low, double high);

/// Whether a wavelength [m] lies in the pass band of a filter.
[[nodiscard]] bool passes(const Filter& filter, double wavelength);

/// Irradiance that the ambient light puts on a surface within the filter's pass band [W/m2], filter losses
/// not counted. Sun: the G173 spectrum scaled to the illuminance; exact only for that spectral shape,
/// pessimistic in shade. Lamp: a Planckian scaled to the illuminance.
[[nodiscard]] double ambient_band_irradiance(const Environment& environment, const Filter& filter);

}  // namespace glint
