// The one description of every field of a design.
#pragma once

#include <glint/design/record.h>

namespace glint {

/// The record of struct Design: each field once, with kind, accepted range, default or required, one line of
/// help.
[[nodiscard]] const Record& design_record();

}  // namespace glint
