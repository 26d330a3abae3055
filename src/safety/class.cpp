// From ratios of emission to limit to the class they point to.
#include <glint/safety/class.h>
#include <glint/safety/domain.h>

namespace glint {
namespace {

bool holds(const ConditionRatios& ratios) { return ratios.condition_1 <= 1 && ratios.condition_3 <= 1; }

// Of ratios that do not hold: too much for the telescope only, and that below the 3B limit; the M of 1M and
// 2M.
bool holds_without_telescope(const ConditionRatios& ratios, const ClassRatios& all) {
    return ratios.condition_3 <= 1 && all.class_3B.condition_1 < 1;
}

void check(const ConditionRatios& ratios) {
    check_not_negative(ratios.condition_1, "ratio of emission to limit under Condition 1");
    check_not_negative(ratios.condition_3, "ratio of emission to limit under Condition 3");
}

}  // namespace

std::string_view name_of(LaserClass laser_class) {
    constexpr std::array<std::string_view, 7> names{"Class 1",  "Class 1M", "Class 2", "Class 2M",
                                                    "Class 3R", "Class 3B", "Class 4"};
    return names[static_cast<std::size_t>(laser_class)];
}

LaserClass indicated_class(const ClassRatios& ratios) {
    check(ratios.class_1);
    if (ratios.class_2) check(*ratios.class_2);
    check(ratios.class_3R);
    check(ratios.class_3B);

    if (holds(ratios.class_1)) return LaserClass::class_1;
    if (holds_without_telescope(ratios.class_1, ratios)) return LaserClass::class_1M;
    if (ratios.class_2) {
        if (holds(*ratios.class_2)) return LaserClass::class_2;
        if (holds_without_telescope(*ratios.class_2, ratios)) return LaserClass::class_2M;
    }
    if (holds(ratios.class_3R)) return LaserClass::class_3R;
    if (holds(ratios.class_3B)) return LaserClass::class_3B;
    return LaserClass::class_4;
}

}  // namespace glint
