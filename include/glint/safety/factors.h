// Correction factors, time base and angles of acceptance of IEC 60825-1:2014, 400 nm to 1400 nm.
#pragma once

#include <glint/safety/class.h>
#include <glint/safety/domain.h>

namespace glint {

/// Smallest angular subtense alpha_min [rad]: 1.5 mrad for every duration.
/// Source: IEC 60825-1:2014, 3.x and 4.3; three secondary sources agree.
inline constexpr double alpha_min = 1.5e-3;
inline constexpr double point_source =
    alpha_min * (1 + 1e-9);  // rad, up to here by arithmetic alpha_min itself

/// C3, photochemical: 1 (400-450 nm); 10^(0.02 (lambda - 450)) (450-600 nm), lambda in nm.
/// `wavelength` in m, 400 nm to 600 nm, else Error. Source: IEC 60825-1:2014 Table 9; one secondary source.
[[nodiscard]] double c3(double wavelength);

/// C4, weaker absorption of the near infrared in the retina: 1 below 700 nm; 10^(0.002 (lambda - 700))
/// (700-1050 nm); 5 (1050-1400 nm), lambda in nm; the smaller value 5 at 1050 nm itself.
/// `wavelength` in m, 400 nm to 1400 nm, else Error. Source: IEC 60825-1:2014 Table 9; two secondary sources.
[[nodiscard]] double c4(double wavelength);

/// Largest angular subtense alpha_max(t) [rad]: 5 mrad (t < 625 us); 200 sqrt(t) mrad (625 us to 0.25 s, t in
/// s); 100 mrad (longer). `duration` in s, else Error. Source: IEC 60825-1:2014, 4.3; end point and break
/// points from one secondary source, 5 mrad and the square-root law from memory, pinned by continuity.
[[nodiscard]] double alpha_max(double duration);

/// C6, extended source: 1 (alpha <= alpha_min); alpha/alpha_min; alpha_max(t)/alpha_min (alpha >
/// alpha_max(t), emission then to be taken inside an angle of acceptance of alpha_max(t)).
/// `subtense` in rad, `duration` in s, else Error. Source: IEC 60825-1:2014 Table 9; first two lines three
/// secondary sources, third from memory.
[[nodiscard]] double c6(double subtense, double duration);

/// C7, absorption before the retina: 1 (to 1150 nm); 10^(0.018 (lambda - 1150)) (1150-1200 nm);
/// 8 + 10^(0.04 (lambda - 1250)) (1200-1400 nm), lambda in nm; the smaller value at 1200 nm itself.
/// `wavelength` in m, 400 nm to 1400 nm, else Error. Source: IEC 60825-1:2014 Table 9; first two lines two
/// secondary sources, third one.
[[nodiscard]] double c7(double wavelength);

/// T2 [s], the time beyond which eye movements stop the retinal limit from growing: 10 s (alpha < 1.5 mrad);
/// 10 * 10^((alpha - 1.5) / 98.5) s, alpha in mrad; 100 s (alpha > 100 mrad). Uses the subtense as it is,
/// not capped at alpha_max. `subtense` in rad, else Error. Source: IEC 60825-1:2014 Table 9; two secondary.
[[nodiscard]] double t2(double subtense);

/// Ti [s], the time within which pulses count as one: 5 us (400-1050 nm); 13 us (1050-1400 nm); 1 ms
/// (1400-1500 nm); 10 s (1500-1800 nm); where two bands meet the longer. `wavelength` in m, 400 nm to 1800
/// nm, else Error. Source: IEC 60825-1:2014 Table 2; above 1400 nm one secondary source, 5 and 13 us from
/// memory.
[[nodiscard]] double grouping_time(double wavelength);

inline constexpr double aversion_time_base = 0.25;     // s: Class 2, 2M and 3R in 400-700 nm
inline constexpr double usual_time_base = 100;         // s: every other case above 400 nm
inline constexpr double long_viewing_time_base = 3e4;  // s: long viewing is part of the purpose

/// Time base [s]: 30 000 s where long intentional viewing is built into the purpose; else 0.25 s for Class 2,
/// 2M and 3R in 400-700 nm; else 100 s. At 700 nm itself 100 s. `wavelength` in m, 400 nm to 1800 nm, else
/// Error. Source: IEC 60825-1:2014, 4.3 e); the three values from three secondary sources.
[[nodiscard]] double time_base(double wavelength, LaserClass laser_class, bool long_viewing = false);

/// Angle of acceptance [rad] for retinal thermal limits: alpha_max(t).
/// Source: IEC 60825-1:2014, 4.3; from memory.
[[nodiscard]] double thermal_acceptance_angle(double duration);

/// Angle of acceptance [rad] for the photochemical limit: 11 mrad (to 100 s); 1.1 sqrt(t) mrad (100 s to
/// 1e4 s, t in s); 110 mrad (longer). `duration` in s, else Error. A source smaller than this needs none.
/// Source: IEC 60825-1:2014 Table 4 footnote; one secondary source.
[[nodiscard]] double photochemical_acceptance_angle(double duration);

}  // namespace glint
