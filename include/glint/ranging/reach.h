// Reach: how far and how precisely each pixel ranges a flat target that fills it and faces the module.
#pragma once

#include <glint/ranging/returns.h>
#include <vector>

namespace glint {

/// The light that serves one pixel best, seen from far away, where emitter and receiver look along one line.
struct PixelLight {
    int dwell = -1;        ///< the dwell that sends most into the pixel's field; -1 when none does
    double intensity = 0;  ///< of that dwell, mean over the pixel's field [W/sr]
    double collected = 0;  ///< solid angle times foreshortened pupil area [m2 sr]
};

/// [rows x columns] in reading order.
[[nodiscard]] std::vector<PixelLight> pixel_lights(const Link& link, const Progress& progress = {});

/// A flat Lambertian target that fills the pixel.
struct FlatTarget {
    double reflectance = 0;
    double distance = 0;  ///< [m]
};

/// What a pixel gets from such a target: energy per shot rho I tp Omega A tau exp(-2 a R) / (pi R^2).
[[nodiscard]] Detection detect_target(const Link& link, const PixelLight& light, const FlatTarget& target);

/// What ends the range of a pixel.
enum class RangeLimit { no_light, signal, background, gate };
[[nodiscard]] const char* name_of(RangeLimit limit);

struct PixelReach {
    double distance = 0;  ///< largest distance with at least the asked probability [m]; 0 without light
    RangeLimit limit = RangeLimit::no_light;
};

/// Largest distance, up to the gate, at which the pixel detects the target with `probability`. The signal
/// falls with distance and the background does not change, so the answer is unique; it is found to 1e-6 of
/// itself. Background limits when the window holds more background than the signal it asks for, else signal
/// does.
[[nodiscard]] PixelReach reach(const Link& link, const PixelLight& light, double reflectance,
                               double probability);

/// Value that the share `share` of the list reaches or exceeds: the (1 - share) quantile, conservative
/// between two entries. 0 for an empty list.
[[nodiscard]] double reached_by_share(std::vector<double> values, double share);

}  // namespace glint
