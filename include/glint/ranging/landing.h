// Landing: where the light of every zone goes in the scene, found by casting its beams forward.
#pragma once

#include <glint/core/parallel.h>
#include <glint/optics/far_field.h>
#include <glint/optics/pose.h>
#include <glint/scene/cast.h>
#include <vector>

namespace glint {

/// What one zone does in the scene at peak power.
struct ZoneLanding {
    double landed = 0;              ///< power on surfaces [W]
    double escaped = 0;             ///< power that meets no surface [W]
    double peak_irradiance = 0;     ///< largest at any hit [W/m2]
    double nearest = 0;             ///< shortest way to a hit [m]; 0 without a hit
    double farthest = 0;            ///< longest [m]
    std::vector<double> on_object;  ///< [objects] power [W]
};

/// Casts rays_per_beam rays from every beam, and at least 1024 from every zone. [zones]
[[nodiscard]] std::vector<ZoneLanding> land_zones(const FarField& field, const Pose& pose, const Scene& scene,
                                                  int rays_per_beam, int seed, const Progress& progress = {});

}  // namespace glint
