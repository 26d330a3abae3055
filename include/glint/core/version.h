// The version of the library and program.
#pragma once

#include <string_view>

namespace glint {

/// "0.1.0"
[[nodiscard]] std::string_view version();

}  // namespace glint
