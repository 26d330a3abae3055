// Corners: the designs at the ends of the tolerances, one of which is the worst for the eye.
#pragma once

#include <glint/design/design.h>

#include <string>
#include <vector>

namespace glint {

/// A design with its tolerances used up, and in which directions.
struct Corner {
    Design design;     ///< its own tolerances are zero
    std::string name;  ///< "power +5 %, divergence -10 %"; "nominal" without tolerances
};

/// Every corner that may be the worst, in a fixed order. Power is always at its upper end. Divergence and
/// focal length are tried at both. So is the pulse width when C5 may fall with it, that is when it can be
/// longer than Ti; else longer pulses are never better. The wavelength is tried at both ends and at every
/// bound of the limit tables between them; those whose limits are nowhere stricter than at another are left
/// out unless a fan-out bends the light by its wavelength.
[[nodiscard]] std::vector<Corner> tolerance_corners(const Design& design);

}  // namespace glint
