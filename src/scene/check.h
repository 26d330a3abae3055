// What is wrong with the parts of a scene.
#pragma once

#include <glint/core/error.h>
#include <glint/scene/scene.h>

#include <vector>

namespace glint {

/// Every problem build_scene refuses; empty when the parts are good.
[[nodiscard]] std::vector<Problem> problems_of(const SceneParts& parts);

}  // namespace glint
