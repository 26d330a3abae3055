// The hazard distance of a module, found by moving the eye away from it.
#pragma once

#include <glint/safety/exposure.h>

namespace glint {

/// Distance from the chip [m] beyond which no place in front of a beam, nor in the direction `also`, gives
/// more than the Class 1 limit; to 1 % and rounded up. 0 when no allowed place does (100 mm or 2 m and the
/// closest access count as the nearest). Beyond 1e4 m it stops looking. Vacuum: the air takes nothing away,
/// which is the stricter reading.
[[nodiscard]] double search_hazard_distance(const LightSource& light, Condition condition, double time_base,
                                            const Vec3& also, const Progress& progress = {});

}  // namespace glint
