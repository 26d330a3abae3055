// Classify: the class that a light source points to.
#pragma once

#include <glint/safety/exposure.h>

namespace glint {

/// Conditions under which a class has to hold: both, or the naked eye alone for Class 1M and 2M.
[[nodiscard]] std::vector<Condition> conditions_of(LaserClass laser_class);

/// Time base of a class: 0.25 s for Class 2, 2M and 3R in 400 nm to below 700 nm, else `longest` [s].
[[nodiscard]] double time_base_of(LaserClass laser_class, double wavelength, double longest);

/// Whether no ratio of the class exceeds 1, the search's allowance included.
[[nodiscard]] bool holds(const LightSource& light, LaserClass laser_class,
                         const std::vector<Condition>& conditions, double time_base,
                         Accuracy accuracy = Accuracy::fine, const Progress& progress = {});

/// The least hazardous class that holds. `class_1`: what a search of Class 1 under both conditions found.
[[nodiscard]] LaserClass classify(const LightSource& light, const EyeSearch& class_1, double time_base,
                                  Accuracy accuracy = Accuracy::fine, const Progress& progress = {});

}  // namespace glint
