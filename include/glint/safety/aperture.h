// Measurement conditions: the aperture that stands for the eye, or for the eye behind a telescope.
#pragma once

#include <string_view>

namespace glint {

/// The two measurement conditions used for an open beam (Condition 2 of earlier editions is gone).
enum class Condition {
    telescope,  ///< Condition 1
    naked_eye,  ///< Condition 3
};

/// "Condition 1 (telescope)", "Condition 3 (naked eye)".
[[nodiscard]] std::string_view name_of(Condition);

/// A circular aperture [m] at a distance [m] from the reference point.
struct MeasurementCondition {
    double aperture = 0;  ///< diameter
    double distance = 0;
};

/// Magnification a telescope may be credited with for the subtense of an extended source under Condition 1.
/// Source: IEC 60825-1:2014, 4.3 and Table 10 footnote, from memory.
inline constexpr double telescope_magnification = 7;

/// Aperture and distance of a condition. 400-1400 nm: 50 mm at 2 m (telescope), 7 mm at 0.1 m (naked eye).
/// From 1400 nm on: naked eye 1 mm (t <= 0.35 s), 1.5 t^(3/8) mm (0.35 s to 10 s), 3.5 mm (longer) at 0.1 m,
/// telescope seven times that at 2 m. Where two cells meet the larger aperture. For a pulse train use the
/// duration of the window under test. `wavelength` in m (400 nm to 1800 nm), `duration` in s, else Error.
/// Source: IEC 60825-1:2014 Table 10; 7 mm and 0.1 m two secondary sources, 2 m one, the rest from memory.
[[nodiscard]] MeasurementCondition measurement(Condition condition, double wavelength, double duration);

}  // namespace glint
