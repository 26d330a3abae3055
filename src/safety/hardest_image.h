// One image that is no easier on the eye than any of many, for beams that are alike.
#pragma once

#include <glint/safety/apparent_source.h>
#include <glint/safety/domain.h>

#include <span>
#include <vector>

namespace glint {

/// The brightest, smallest and sharpest of several images of beams that are alike. Such images differ between
/// places and foci in brightness, size and blur only.
struct ImageExtremes {
    std::vector<double> energy;       ///< largest of each beam [J]
    Vec2 size = Vec2::Constant(1e9);  ///< least distance of the outermost middles, across and up [rad]
    Vec2 half = Vec2::Constant(1e9);  ///< least half width of a spot [rad]
    Interval whole{1e9, 0};           ///< subtenses of the whole images [rad]
};

/// Of the images at one place for several foci.
[[nodiscard]] ImageExtremes extremes_of(const EnteringLight& light, std::span<const double> vergences);

/// Widens `extremes` to those of further images of the same beams.
void include(ImageExtremes& extremes, const ImageExtremes& further);

/// The image of `light`, made as bright, small and sharp as the extremes. Its whole subtense is not its own:
/// see `whole`.
[[nodiscard]] std::vector<Spot> hardest_image(const EnteringLight& light, const ImageExtremes& extremes);

}  // namespace glint
