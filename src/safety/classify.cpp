// Classify: the class that a light source points to.
#include <glint/safety/classify.h>

#include <algorithm>

namespace glint {
namespace {

bool visible(double wavelength) {
    return wavelength >= 400e-9 * (1 - 1e-9) && !touches({700e-9, 1800e-9}, wavelength);
}

}  // namespace

std::vector<Condition> conditions_of(LaserClass laser_class) {
    if (laser_class == LaserClass::class_1M || laser_class == LaserClass::class_2M)
        return {Condition::naked_eye};
    return {Condition::telescope, Condition::naked_eye};
}

double time_base_of(LaserClass laser_class, double wavelength, double longest) {
    const bool brief = laser_class == LaserClass::class_2 || laser_class == LaserClass::class_2M ||
                       laser_class == LaserClass::class_3R;
    return brief && visible(wavelength) ? std::min(longest, aversion_time_base) : longest;
}

bool holds(const LightSource& light, LaserClass laser_class, const std::vector<Condition>& conditions,
           double time_base, Accuracy accuracy, const Progress& progress) {
    const double limit = limit_of_search(light, accuracy);
    EyeSearch from_the_limit;
    from_the_limit.known.fill(limit);
    const ExposureQuestion question{laser_class, time_base_of(laser_class, light.wavelength, time_base),
                                    conditions, limit, accuracy};
    return search_exposure(light, question, std::move(from_the_limit), progress).worst_ratio() <= limit;
}

LaserClass classify(const LightSource& light, const EyeSearch& class_1, double time_base, Accuracy accuracy,
                    const Progress& progress) {
    if (class_1.bound() <= 1) return LaserClass::class_1;
    // Beyond the limit it does not matter how far, nor within it.
    constexpr double beyond = 2, within = 0.5;
    const auto ratio = [&](LaserClass laser_class, Condition condition) {
        return holds(light, laser_class, {condition}, time_base, accuracy, progress) ? within : beyond;
    };
    const auto both = [&](LaserClass laser_class) {
        ConditionRatios ratios{ratio(laser_class, Condition::telescope),
                               ratio(laser_class, Condition::naked_eye)};
        if (laser_class != LaserClass::class_1) return ratios;
        for (const EyeCase& each : class_1.worst)
            if (each.part.worst.ratio > limit_of_search(light, accuracy))
                (each.condition == Condition::telescope ? ratios.condition_1 : ratios.condition_3) = beyond;
        return ratios;
    };
    ClassRatios all{.class_1 = both(LaserClass::class_1),
                    .class_2 = {},
                    .class_3R = both(LaserClass::class_3R),
                    .class_3B = both(LaserClass::class_3B)};
    if (visible(light.wavelength)) all.class_2 = both(LaserClass::class_2);
    return indicated_class(all);
}

}  // namespace glint
