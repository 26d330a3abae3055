// Pictures of one assessment.
#pragma once

#include <glint/plan/assessment.h>
#include <glint/report/canvas.h>
#include <span>
#include <string>

namespace glint {

/// A picture that can be asked for by name.
struct View {
    std::string name;  ///< "points"
    std::string help;
    Canvas (*draw)(const Design& design, const Assessment& assessment);
    bool needs_diode = false;  ///< drawn only when the light follows from a diode
};

/// Whether a view shows anything of this assessment.
[[nodiscard]] bool drawable(const View& view, const Assessment& assessment);

/// All views; a new picture is one line here.
[[nodiscard]] std::span<const View> views();

/// The points of one frame from a raised viewpoint, coloured by range.
[[nodiscard]] Canvas points_picture(const Design& design, const Assessment& assessment);

/// The zones over the field, coloured by when they fire, with the receiver's field around them.
[[nodiscard]] Canvas zones_picture(const Design& design, const Assessment& assessment);

}  // namespace glint
