// The parts of the design's record that have files of their own.
#pragma once

#include <glint/design/record.h>

namespace glint {

[[nodiscard]] Record emitters_record();
[[nodiscard]] Record drive_record();
[[nodiscard]] Record firing_record();
[[nodiscard]] Record eye_safety_record();

}  // namespace glint
