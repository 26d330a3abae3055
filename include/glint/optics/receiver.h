// Receiver optics: pixels to directions, and how much light each collects.
#pragma once

#include <glint/core/vector.h>
#include <glint/design/design.h>

namespace glint {

/// One ray of a pixel, in the module's frame, from the middle of the receiver lens.
struct PixelRay {
    Vec3 direction = Vec3::UnitX();  ///< unit
    double solid_angle = 0;          ///< of the whole pixel around this direction, fill factor included [sr]
    double cosine = 0;               ///< of the angle to the optical axis
};

/// Middle of the receiver lens in the module's frame [m].
[[nodiscard]] Vec3 receiver_position(const Receiver& receiver);

/// Ray of the point (across, down) of a pixel, each in [0, 1], from its upper left. Pixel (0, 0) is the upper
/// left of the FIELD. Tangent mapping: x = f tan(theta), solid angle = A cos^3(theta) / f^2; f-theta: x = f
/// theta, solid angle = A sin(theta) / (theta f^2). With the lens's area foreshortened by cos(theta) a
/// tangent lens falls off as cos^4 (textbook).
[[nodiscard]] PixelRay pixel_ray(const Receiver& receiver, int column, int row, const Vec2& within);

/// Area of the entrance pupil [m2]: pi/4 (f / N)^2.
[[nodiscard]] double pupil_area(const ReceiverLens& lens);

/// Full field of view, horizontal and vertical, between the outer edges of the pixel grid [rad].
[[nodiscard]] Vec2 field_of_view(const Receiver& receiver);

}  // namespace glint
