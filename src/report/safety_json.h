// The verdict on eye safety as a part of a larger JSON object.
#pragma once

#include <glint/safety/verdict.h>

#include <nlohmann/json_fwd.hpp>

namespace glint {

/// Found by the JSON library wherever a verdict is assigned to an object.
void to_json(nlohmann::ordered_json& json, const SafetyVerdict& verdict);

}  // namespace glint
