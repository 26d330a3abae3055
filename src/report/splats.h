// Discs in space, drawn with hidden ones hidden and edges of depth shaded.
#pragma once

#include <glint/core/vector.h>
#include <glint/report/canvas.h>
#include "report/camera.h"

#include <optional>
#include <span>
#include <vector>

namespace glint {

/// One disc.
struct Splat {
    Vec3 centre = Vec3::Zero();
    std::optional<Vec3> normal;  ///< unit, towards the eye; none: the disc faces the eye
    double radius = 0;           ///< m
    Colour colour;
};

/// Depth of what each pixel of a window shows, row by row; infinite where nothing is.
struct DepthMap {
    PixelWindow window;
    std::vector<float> depth;

    [[nodiscard]] float at(int column, int row) const;
};

/// Draws the discs inside `plot` and returns their depths. Discs that lie within a radius of each other
/// blend, so that a dense cloud reads as one surface (after Zwicker, Pfister, van Baar, Gross 2001). A pixel
/// is darkened by what stands nearer around it (eye-dome lighting: Boucheny 2009), on the empty page too, so
/// that pale marks keep an edge.
[[nodiscard]] DepthMap draw_splats(Canvas& canvas, const PageBox& plot, const Camera& camera,
                                   std::span<const Splat> splats);

/// Draws a straight line of space where it is not hidden; `slack` is how far it may lie behind what hides it,
/// a share of depth.
void draw_line(Canvas& canvas, const DepthMap& depths, const Camera& camera, const Vec3& from, const Vec3& to,
               const Pen& pen, double slack);

}  // namespace glint
