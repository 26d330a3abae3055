// Exposure: the worst emission a person can get from a module, over all conditions, mechanisms and criteria.
#pragma once

#include <glint/safety/eye_search.h>

#include <span>
#include <vector>

namespace glint {

/// What a module sends out, and when.
struct LightSource {
    FiringPlan plan;
    FarField field;             ///< not merged
    double wavelength = 0;      ///< [m], 400 nm to 1800 nm
    double closest_access = 0;  ///< from the chip to the closest place a person can reach [m]
};

/// Light of an array through its optics. Errors: those of project().
[[nodiscard]] LightSource light_source(const Design& design, const EmitterArray& array,
                                       const FiringPlan& plan);

/// Ratio that a search may find while no place, focus or part exceeds the limit.
[[nodiscard]] double limit_of_search(const LightSource& light, Accuracy accuracy = Accuracy::fine);

/// Against what the light is held.
struct ExposureQuestion {
    LaserClass laser_class = LaserClass::class_1;  ///< not Class 4
    double time_base = 100;                        ///< [s]
    std::vector<Condition> conditions{Condition::telescope, Condition::naked_eye};
    double enough = 1e300;  ///< ratio beyond which it does not matter how much worse it gets
    Accuracy accuracy = Accuracy::fine;
};

/// Worst cases over the conditions and every mechanism with a limit of the class: retinal thermal (parts of
/// the image), photochemical, corneal and the Class 3B ceiling (all that enters). From 1400 nm on durations
/// up to 0.35 s are held against the small aperture, longer ones against that of 10 s and more, which is the
/// stricter reading in between.
[[nodiscard]] EyeSearch search_exposure(const LightSource& light, const ExposureQuestion& question,
                                        EyeSearch before = {}, const Progress& progress = {});

/// The limits that some of the searches above test, one pattern for each mechanism and range of durations.
[[nodiscard]] std::vector<TimePattern> patterns_of(const LightSource& light, LaserClass laser_class,
                                                   double time_base);

/// One emission held against its limit, the search's allowance included.
struct ExposureCase {
    PulseCriterion criterion = PulseCriterion::single;
    Condition condition = Condition::naked_eye;
    Mechanism mechanism = Mechanism::retinal_thermal;
    double duration = 0;  ///< of the emission [s]
    double pulses = 1;    ///< pulses in it; for the train criterion N
    double C5 = 1;
    double C6 = 1;
    double subtense = 0;  ///< of the part [rad]; 0 for limits without an angle
    Vec2 part_low =
        Vec2::Zero();  ///< corners of the part, to the module's right and up, from the line of sight [rad]
    Vec2 part_high = Vec2::Zero();
    double ae = 0;            ///< accessible emission [J]
    double ael = 0;           ///< its limit, C5 included [J]
    Vec3 eye = Vec3::Zero();  ///< middle of the aperture, module frame [m]
    double focus = 0;         ///< distance the eye focuses on [m]; infinite when relaxed
    std::vector<int> zones;   ///< that contribute

    [[nodiscard]] double ratio() const { return ael > 0 ? ae / ael : 0; }
};

/// The cases that were found, largest ratio first.
[[nodiscard]] std::vector<ExposureCase> exposure_cases(const EyeSearch& found);

}  // namespace glint
