// Pictures of the chip: how warm its emitters are, and when its zones fire.
#pragma once

#include <glint/emitter/array.h>
#include <glint/emitter/firing.h>
#include <glint/report/canvas.h>
#include <span>
#include <string>

namespace glint {

/// The emitters in place on the chip, seen from behind the module, coloured by temperature [n] [K]; the zone
/// of the hottest emitter is outlined (the first of them in ties). `name` of the design, may be empty. Error
/// when there is no emitter, or temperatures are not n or not finite.
[[nodiscard]] Canvas junction_map_picture(const std::string& name, const EmitterArray& array,
                                          std::span<const double> temperature);

/// The zones against time over one frame, and below it the shots of the first dwell up to the next one; of a
/// dwell with many shots only its last ones. Bars are at least one unit of the page wide and high, and so may
/// be longer than what they stand for. `name` of the design, may be empty. Error when nothing fires.
[[nodiscard]] Canvas firing_times_picture(const std::string& name, const FiringPlan& plan);

}  // namespace glint
