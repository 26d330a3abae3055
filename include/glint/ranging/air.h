// Air: extinction by haze and fog, and the index that timing sees.
#pragma once

namespace glint {

/// Extinction coefficient [1/m] at a meteorological visibility [m] and wavelength [m]:
/// (3.912 / V) (lambda / 550 nm)^-q, q after Kim (Proc. SPIE 4214, 2001): 1.6 above 50 km, 1.3 from 6 km,
/// 0.16 V + 0.34 from 1 km, V - 0.5 from 0.5 km, 0 below, V in km.
[[nodiscard]] double extinction(double visibility, double wavelength);

/// Group index of standard air (15 C, 101.325 kPa): n - lambda dn/dlambda with n of Ciddor (1996), 0.23
/// to 1.69 um.
[[nodiscard]] double air_group_index(double wavelength);

}  // namespace glint
