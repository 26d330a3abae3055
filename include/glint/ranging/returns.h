// Returns: what every pixel gets back from the scene in every dwell that lights it.
#pragma once

#include <glint/core/parallel.h>
#include <glint/design/design.h>
#include <glint/emitter/firing.h>
#include <glint/optics/far_field.h>
#include <glint/optics/pose.h>
#include <glint/ranging/photon_counting.h>
#include <glint/scene/cast.h>
#include <vector>

namespace glint {

/// What one pixel gets from one dwell.
struct Return {
    int column = 0;
    int row = 0;
    int dwell = 0;
    int zone = 0;               ///< the zone of the dwell that gives the pixel most
    int object = 0;             ///< what most of the light came back from
    double range = 0;           ///< half the way from emitter over target to receiver [m]
    Vec3 point = Vec3::Zero();  ///< energy-weighted middle of what was hit, scene frame [m]
    double energy = 0;          ///< of the echo on the pixel per shot, before the detector [J]
    Detection detection;
};

/// All returns in order of row, column, dwell, and what the pixels saw.
struct Returns {
    std::vector<Return> list;
    std::size_t rays = 0;           ///< pixel rays cast
    std::size_t rays_hit = 0;       ///< that met a surface within the gate
    std::size_t pixels_seeing = 0;  ///< pixels with at least one such ray
};

/// Everything the receiver's side of the light needs, prepared once.
struct Link {
    const Design& design;
    const FiringPlan& plan;
    const FarField& field;
    std::vector<int> dwell_of_zone;  ///< [zones]
    CountingModel model;
    Pose pose;
    double ambient = 0;       ///< irradiance of the ambient light in the band, before the filter [W/m2]
    double pupil = 0;         ///< area of the receiver's pupil [m2]
    double transmission = 0;  ///< of receiver lens and filter
    double extinction = 0;    ///< of the air [1/m]
};
[[nodiscard]] Link make_link(const Design& design, const FiringPlan& plan, const FarField& field);

/// Casts rays_per_pixel rays from every pixel, lights each hit by all beams that reach it unless a shadow ray
/// to the strongest finds something in the way, and forms one echo a dwell: the rays whose ranges fit into
/// one matched window and together bring most energy. Surfaces are Lambertian and all receive the ambient
/// illuminance.
[[nodiscard]] Returns cast_returns(const Link& link, const Scene& scene, const Progress& progress = {});

}  // namespace glint
