// The apparent source: the image of every beam on the retina of an eye at a place, focused at a distance.
//
// Rays are followed in place and slope over planes normal to the module's axis, where every beam is a
// Gaussian in both with a known correlation; a lens, a free path and the eye's focus are linear there. The
// pupil cuts the Gaussian down.
#pragma once

#include <glint/optics/far_field.h>
#include <glint/safety/collection.h>

#include <span>
#include <vector>

namespace glint {

/// An eye looking at the module.
struct EyePlace {
    Vec3 place = Vec3::UnitX();    ///< middle of the pupil, module frame, in front of the module [m]
    double pupil_radius = 3.5e-3;  ///< or that of the telescope's aperture [m]
};

/// Angles, across and up, under which light from the origin of the chip arrives, in the coordinates of the
/// image [rad].
[[nodiscard]] Vec2 line_of_sight(const EyePlace& eye);

/// A beam that enters the pupil, as far as it does not depend on the focus.
struct EnteringBeam {
    int zone = 0;
    double energy = 0;          ///< through the pupil per shot [J]
    Vec2 slope = Vec2::Zero();  ///< of the beam's middle
    Vec2 offset =
        Vec2::Zero();      ///< of the beam's middle from that of the pupil, in the plane of the pupil [m]
    double width = 0;      ///< 1/e2 radius at the beam's origin [m]
    double curvature = 0;  ///< [1/m]
    double spread = 0;     ///< 1/e2 half width of the slopes that the curvature does not explain
    double path = 0;       ///< from the beam's origin to the pupil, along the axis [m]
};

/// All light that enters an eye, before it is focused.
struct EnteringLight {
    EyePlace eye;
    std::vector<EnteringBeam> beams;
    Vec2 scale = Vec2::Ones();  ///< angle at the eye per slope, across and up
    double cosine = 1;          ///< of the line of sight to the module's axis
    double passed = 0;          ///< energy of all of them per shot [J]
};

/// Beams of `field` (not merged) that send something into the pupil, each by collected_share.
[[nodiscard]] EnteringLight entering_light(const FarField& field, const EyePlace& eye, double pulse_width);

/// The image of one beam: a rectangle of even energy. It has the peak and the energy of the Gaussian it
/// stands for (side sqrt(pi/2) times the 1/e2 radius), so that no window gathers more of the Gaussian than of
/// it, for its size.
struct Spot {
    Vec2 middle = Vec2::Zero();  ///< [rad]
    Vec2 half = Vec2::Zero();    ///< [rad], at least 1 nrad
    double energy = 0;           ///< per shot [J]
    int zone = 0;
};

/// The image of one beam for an eye focused at 1/vergence [1/m], 0 to 10. A beam cut by the pupil counts as a
/// Gaussian of the smaller of its own width and the pupil's there: 1/r^2 = 1/w^2 + 1/(1.124 a)^2, which makes
/// the spot smaller.
[[nodiscard]] Spot spot_of(const EnteringBeam& beam, const EnteringLight& light, double vergence);

/// The retinal image: the spot of every beam.
[[nodiscard]] std::vector<Spot> retinal_image(const EnteringLight& light, double vergence);

/// Subtense of a whole image: the mean of its two extents, each at least alpha_min [rad].
[[nodiscard]] double whole_subtense(std::span<const Spot> image);

/// Vergences to look at: 0 to 10 in steps of half a dioptre, of five for beams so wide that they come from
/// where they start whatever the focus; the beams' own foci; their crossing; their exit plane.
[[nodiscard]] std::vector<double> vergences(const EnteringLight& light);

/// Vergences on both sides of where the whole image becomes as large as one of `subtenses` [rad], between
/// neighbours of a sorted list: where a limit jumps with the size of the image.
[[nodiscard]] std::vector<double> crossings(const EnteringLight& light, std::span<const double> vergences,
                                            std::span<const double> subtenses);

}  // namespace glint
