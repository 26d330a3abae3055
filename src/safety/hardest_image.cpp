// One image that is no easier on the eye than any of many, for beams that are alike.
#include "hardest_image.h"

#include <algorithm>

namespace glint {
namespace {

Vec2 extent_of_middles(std::span<const Spot> image) {
    Vec2 low = image.front().middle, high = low;
    for (const Spot& spot : image) low = low.cwiseMin(spot.middle), high = high.cwiseMax(spot.middle);
    return high - low;
}

}  // namespace

ImageExtremes extremes_of(const EnteringLight& light, std::span<const double> vergences) {
    ImageExtremes extremes;
    for (const EnteringBeam& beam : light.beams) extremes.energy.push_back(beam.energy);
    for (const double vergence : vergences) {
        const std::vector<Spot> image = retinal_image(light, vergence);
        const double whole = whole_subtense(image);
        extremes.size = extremes.size.cwiseMin(extent_of_middles(image));
        extremes.half = extremes.half.cwiseMin(image.front().half);
        extremes.whole = {std::min(extremes.whole.from, whole), std::max(extremes.whole.to, whole)};
    }
    return extremes;
}

void include(ImageExtremes& extremes, const ImageExtremes& further) {
    extremes.size = extremes.size.cwiseMin(further.size),
    extremes.half = extremes.half.cwiseMin(further.half);
    extremes.whole = {std::min(extremes.whole.from, further.whole.from),
                      std::max(extremes.whole.to, further.whole.to)};
    for (std::size_t i = 0; i < extremes.energy.size(); ++i)
        extremes.energy[i] = std::max(extremes.energy[i], further.energy[i]);
}

std::vector<Spot> hardest_image(const EnteringLight& light, const ImageExtremes& extremes) {
    std::vector<Spot> image = retinal_image(light, 0);
    const Vec2 size = extent_of_middles(image);
    for (std::size_t i = 0; i < image.size(); ++i) {
        Spot& spot = image[i];
        for (int axis = 0; axis < 2; ++axis)
            if (size[axis] > 0) spot.middle[axis] *= extremes.size[axis] / size[axis];
        spot.half = extremes.half, spot.energy = extremes.energy[i];
    }
    return image;
}

}  // namespace glint
