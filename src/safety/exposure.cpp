// Exposure: the worst emission a person can get from a module, over all conditions, mechanisms and criteria.
#include <glint/safety/exposure.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace glint {
namespace {

constexpr double end_of_small_aperture = 0.35;  // s, from 1400 nm on

ExposureCase in_words(const EyeCase& found, PulseCriterion criterion, double allowance) {
    const TimedRatio& worst = found.part.worst;
    const bool retinal = found.mechanism == Mechanism::retinal_thermal;
    ExposureCase each{
        .criterion = criterion,
        .condition = found.condition,
        .mechanism = found.mechanism,
        .duration = worst.duration,
        .pulses = worst.pulses,
        .C5 = worst.C5,
        .ae = worst.ae * allowance,
        .ael = worst.ael,
        .eye = found.eye.place,
        .focus = found.vergence > 0 ? 1 / found.vergence : std::numeric_limits<double>::infinity(),
        .zones = found.part.zones};
    if (!retinal) return each;
    const double duration = std::clamp(worst.duration, limit_durations.from, limit_durations.to);
    each.subtense = found.part.subtense;
    each.C6 = c6(found.part.subtense, duration);
    const Vec2 sight = line_of_sight(found.eye);
    each.part_low = Vec2(sight.x() - found.part.high.x(), found.part.low.y() - sight.y());
    each.part_high = Vec2(sight.x() - found.part.low.x(), found.part.high.y() - sight.y());
    return each;
}

}  // namespace

LightSource light_source(const Design& design, const EmitterArray& array, const FiringPlan& plan) {
    return {.plan = plan,
            .field = far_field(project(array, design), Merge::no),
            .wavelength = design.emitters.wavelength,
            .closest_access = design.eye_safety.closest_access};
}

double limit_of_search(const LightSource& light, Accuracy accuracy) {
    return 1 / allowance_for(slack_for(light.field, accuracy));
}

std::vector<TimePattern> patterns_of(const LightSource& light, LaserClass laser_class, double time_base) {
    std::vector<TimePattern> patterns;
    const bool corneal = light.wavelength >= retinal_wavelengths.to * (1 - 1e-9);
    for (const Mechanism mechanism :
         {Mechanism::retinal_thermal, Mechanism::photochemical, Mechanism::corneal, Mechanism::ceiling}) {
        ExposureRules rules{laser_class, light.wavelength, time_base, mechanism, {0, limit_durations.to}};
        const auto add = [&](Interval durations) {
            rules.durations = durations;
            TimePattern pattern = time_pattern(light.plan, rules);
            if (!pattern.curve.pieces.empty()) patterns.push_back(std::move(pattern));
        };
        if (!corneal)
            add({0, limit_durations.to});
        else if (mechanism != Mechanism::retinal_thermal || touches(retinal_wavelengths, light.wavelength)) {
            add({0, end_of_small_aperture});
            add({end_of_small_aperture, limit_durations.to});
        }
    }
    return patterns;
}

EyeSearch search_exposure(const LightSource& light, const ExposureQuestion& question, EyeSearch before,
                          const Progress& progress) {
    EyeSearch found = std::move(before);
    for (const TimePattern& pattern : patterns_of(light, question.laser_class, question.time_base))
        for (const Condition condition : question.conditions) {
            if (found.worst_ratio() > question.enough) return found;
            found = search_eyes(
                {pattern, light.field, condition, light.closest_access, question.enough, question.accuracy},
                std::move(found), progress);
        }
    return found;
}

std::vector<ExposureCase> exposure_cases(const EyeSearch& found) {
    std::vector<ExposureCase> cases;
    for (std::size_t c = 0; c < found.worst.size(); ++c)
        if (found.worst[c].part.worst.ratio > 0)
            cases.push_back(
                in_words(found.worst[c], static_cast<PulseCriterion>(c), allowance_for(found.slack)));
    std::ranges::stable_sort(cases, std::greater{}, [](const ExposureCase& each) { return each.ratio(); });
    return cases;
}

}  // namespace glint
