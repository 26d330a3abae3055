// Collection: how much of a beam passes an aperture in front of the module.
#pragma once

#include <glint/optics/beam.h>

namespace glint {

/// A circular aperture that faces the module's origin, in the module's frame [m].
struct Aperture {
    Vec3 centre = Vec3::Zero();
    double radius = 0;
};

/// Share of a beam's power that passes the aperture, 0 to 1. Narrow Gaussian beams: the offset disc of a
/// round Gaussian whose radius is the smaller one of the beam there (radius_at), which gathers most. Wide
/// kernels: the integral of the intensity over the disc, by seven points where the kernel is smooth across
/// it, otherwise by as many as its walls and edges ask for (to 1e-3; hard edges to 1e-2).
[[nodiscard]] double collected_share(const Beam& beam, const Aperture& aperture);

}  // namespace glint
