// Beams: what each emitter sends out after the projection optics.
#pragma once

#include <glint/design/design.h>
#include <glint/emitter/array.h>
#include <glint/optics/kernel.h>
#include <string>
#include <vector>

namespace glint {

/// One beam in the module's frame: x forward, y left, z up, the chip in the plane x = 0 around the origin.
struct Beam {
    Vec3 origin = Vec3::Zero();   ///< middle of the beam where it leaves the last element [m]
    Vec3 axis = Vec3::UnitX();    ///< unit direction
    Vec3 right = -Vec3::UnitY();  ///< unit, normal to the axis: the kernel's p direction
    Kernel kernel;
    double power = 0;        ///< peak [W]
    double exit_radius = 0;  ///< 1/e2 radius of the beam at its origin [m]
    double curvature =
        0;  ///< change of slope with place across the beam at its origin [1/m]; below 0 it converges
    int zone = 0;
    int emitter = 0;
};

/// Peak power that is in no beam, and why.
struct Loss {
    std::string name;
    double power = 0;  ///< [W], all emitters together
};

struct Beams {
    std::vector<Beam> beams;
    std::vector<Loss> losses;
    double emitted = 0;  ///< peak power of all emitters [W]; the beams and the losses add up to it
    int zones = 0;
};

/// Sends the light of every emitter through the optics. Each emitter radiates along the chip's normal.
/// Lens: the chief ray of an emitter at x leaves the lens at x towards -x (the lens inverts), through the
/// back focal point; tangent mapping |x| = f tan(angle), f-theta |x| = f angle. The residual divergence is
/// sqrt(w0^2 + (defocus tan(theta_e))^2) / f, narrowed by the mapping's local scale, plus the lens blur in
/// quadrature (textbook geometric optics). Light beside the clear aperture is lost.
/// Diffuser: a beam lights a spot of its radius at the diffuser, and every place of it sends out the whole
/// field. Fan-out: each beam becomes one beam an order, direction cosines shifted by m lambda / period
/// (grating equation); orders beyond 90 degrees are lost. Errors: an emitter beyond the lens's field, or no
/// light through the lens.
[[nodiscard]] Beams project(const EmitterArray& array, const Design& design);

/// 1/e2 radius of a beam a distance along its axis from its origin [m]:
/// sqrt(W^2 (1 + L c)^2 + L^2 eta^2), W the exit radius, c the curvature, eta the part of the kernel's
/// smaller half width that the curvature does not explain (sqrt(k^2 - (c W)^2); ray optics in two
/// coordinates).
[[nodiscard]] double radius_at(const Beam& beam, double along);

/// Radiant intensity of one beam in a unit direction [W/sr].
[[nodiscard]] double intensity(const Beam& beam, const Vec3& direction);

/// Peak power of each zone [W].
[[nodiscard]] std::vector<double> zone_powers(const Beams& beams);

}  // namespace glint
