// Laser classes: their names, and which one a set of ratios of emission to limit points to.
#pragma once

#include <array>
#include <optional>
#include <string_view>

namespace glint {

/// The classes of IEC 60825-1:2014 that an open beam may fall into (Class 1C, contact devices, is left out).
enum class LaserClass { class_1, class_1M, class_2, class_2M, class_3R, class_3B, class_4 };

/// All classes, least hazardous first.
inline constexpr std::array laser_classes{LaserClass::class_1,  LaserClass::class_1M, LaserClass::class_2,
                                          LaserClass::class_2M, LaserClass::class_3R, LaserClass::class_3B,
                                          LaserClass::class_4};

/// "Class 1", "Class 1M", ...
[[nodiscard]] std::string_view name_of(LaserClass);

/// AE/AEL of one class under the two measurement conditions, each the largest over all emission durations
/// within the time base; finite and not negative.
struct ConditionRatios {
    double condition_1 = 0;  ///< telescope
    double condition_3 = 0;  ///< naked eye
};

/// AE/AEL for every class with a limit; Class 1M and 2M use the limits of 1 and 2.
struct ClassRatios {
    ConditionRatios class_1;
    std::optional<ConditionRatios> class_2;  ///< only for visible light, 400 nm to 700 nm
    ConditionRatios class_3R;
    ConditionRatios class_3B;
};

/// The least hazardous class whose tests the ratios pass, in this order:
/// 1 (both conditions at most 1); 1M (Condition 1 above 1, Condition 3 at most 1, Condition 1 below the 3B
/// limit); 2 and 2M by the same tests with the Class 2 limit, visible light only; 3R and 3B (both conditions
/// at most 1); else 4. Throws Error for a ratio that is negative or not finite.
/// Source: IEC 60825-1:2014, 4.3 and 5.3; the scheme read in a reprint of the 2007 edition (clause 8.3 e),
/// that Condition 2 is gone confirmed by two secondary sources, the combination from memory.
[[nodiscard]] LaserClass indicated_class(const ClassRatios& ratios);

}  // namespace glint
