// The small-source evaluation: every source taken as a point (C6 = 1), the stricter simplified reading.
#pragma once

#include <glint/core/parallel.h>
#include <glint/design/design.h>
#include <glint/safety/exposure.h>
#include <vector>

namespace glint {

/// How the design stands against the limits.
struct SafetyVerdict {
    LaserClass laser_class = LaserClass::class_4;
    double worst_ratio = 0;  ///< largest AE/AEL of Class 1, both conditions
    double margin = 0;       ///< 1 - worst_ratio; negative when the limit is exceeded
    std::vector<ExposureCase>
        criteria;  ///< Class 1: worst case of each criterion and condition, largest ratio first
    std::size_t places_tested = 0;  ///< eye positions evaluated
};

/// Largest AE/AEL over the whole sphere in front of the module at the distance of each condition (100 mm and
/// 2 m from the chip, farther when the closest access is), all durations and criteria. Searched by dividing
/// the field into squares; a square is dropped only when its bound, the most that passes an aperture which
/// may stand anywhere in it, is not above what was found. At most 3 % above the largest value at any place.
/// Default (simplified) evaluation of IEC 60825-1:2014, 4.3 with C6 = 1.
[[nodiscard]] SafetyVerdict judge_small_source(const Design& design, const FiringPlan& plan,
                                               const FarField& field, const Progress& progress = {});

}  // namespace glint
