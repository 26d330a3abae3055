// The version, as the build sets it.
#include <glint/core/version.h>

namespace glint {

std::string_view version() { return GLINT_VERSION; }

}  // namespace glint
