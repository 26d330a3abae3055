// What an eye sees of a module, worked out a second time: energies by sums over the pupil, the image by
// matrices.
#pragma once

#include <glint/optics/beam.h>

#include <vector>

namespace glint::test {

/// An eye that looks at the module.
struct BruteEye {
    Vec3 place = Vec3::UnitX();    ///< middle of the pupil, module frame [m]
    double pupil_radius = 3.5e-3;  ///< [m]
    double vergence = 0;           ///< 1/focus distance [1/m]
};

/// Energy [J] of one beam through the pupil per pulse, summed over rings (narrow beams) or over a polar grid
/// (wide ones); better than 1e-3 where the kernel has no hard edge. Nothing where the pupil is beyond three
/// 1/e2 radii.
[[nodiscard]] double brute_energy(const Beam& beam, const BruteEye& eye, double pulse_width);

/// The image of one beam: a rectangle of even energy [rad].
struct BruteSpot {
    Vec2 low, high;
    double energy = 0;  ///< per pulse [J]
    int zone = 0;
};

/// The spots of all beams that send something into the pupil.
[[nodiscard]] std::vector<BruteSpot> brute_image(const Beams& beams, const BruteEye& eye, double pulse_width);

}  // namespace glint::test
