// Collection: how much of each zone's light passes an aperture in front of the module.
#pragma once

#include <glint/optics/far_field.h>
#include <vector>

namespace glint {

/// A circular aperture that faces the module's origin, in the module's frame [m].
struct Aperture {
    Vec3 centre = Vec3::Zero();
    double radius = 0;
    double play =
        0;  ///< how far the aperture may be moved aside; what passes is then the most at any such place
};

/// Share of a beam's power that passes the aperture, 0 to 1. Narrow Gaussian beams: the offset disc of a
/// round Gaussian whose radius is the smaller one of the beam there, sqrt(exit_radius^2 + (L theta)^2), which
/// gathers most; where the aperture is wide against the beam, the half plane within its rim, which is never
/// less. Wide kernels: mean intensity over the disc times its solid angle. With play: for narrow beams the
/// disc grown by it, for wide ones the
/// smaller of the disc grown by it and of the largest intensity met within it.
[[nodiscard]] double collected_share(const Beam& beam, const Aperture& aperture);

/// Energy of one zone through the aperture, per shot.
struct ZoneEnergy {
    int zone = 0;
    double energy = 0;  ///< [J]
};

/// Zones with more than nothing, by number. `pulse_width` in s.
[[nodiscard]] std::vector<ZoneEnergy> collected_energies(const FarField& field, const Aperture& aperture,
                                                         double pulse_width);

}  // namespace glint
