// The verdict on eye safety, from the corners of the tolerances to the list of faults.
#include <glint/safety/classify.h>
#include <glint/safety/corners.h>
#include <glint/safety/faults.h>
#include <glint/safety/hazard_search.h>
#include <glint/safety/verdict.h>

#include <algorithm>

namespace glint {
namespace {

LaserClass class_of(AskedClass asked) {
    constexpr LaserClass classes[] = {LaserClass::class_1,  LaserClass::class_1M, LaserClass::class_2,
                                      LaserClass::class_2M, LaserClass::class_3R, LaserClass::class_3B};
    return classes[static_cast<int>(asked)];
}

// The strictest requirement on eye safety, or Class 1 without a margin.
EyeSafetyRequirement asked_of(const Design& design) {
    std::optional<EyeSafetyRequirement> asked;
    for (const Requirement& each : design.requirements.list)
        if (const auto* safety = std::get_if<EyeSafetyRequirement>(&each)) {
            const bool stricter =
                !asked || safety->laser_class < asked->laser_class ||
                (safety->laser_class == asked->laser_class && safety->margin > asked->margin);
            if (stricter) asked = *safety;
        }
    return asked.value_or(EyeSafetyRequirement{});
}

// Power that all emitters of the largest shot send out at the chip [W].
double shot_power(const FiringPlan& plan, const EmitterArray& array, double peak_power) {
    std::vector<double> of_zone(static_cast<std::size_t>(array.zones), 0.0);
    for (std::size_t i = 0; i < array.size(); ++i) of_zone[array.zone_of[i]] += array.power_of(i);
    double most = 0;
    for (int dwell = 0; dwell < plan.dwells(); ++dwell) {
        double sum = 0;
        for (const int zone : plan.zones_of(dwell)) sum += of_zone[zone];
        most = std::max(most, sum);
    }
    return most * peak_power;
}

}  // namespace

SafetyVerdict judge_safety(const Design& design, const EmitterArray& array, const Progress& progress) {
    SafetyVerdict verdict{.worst_design = design};
    const double time_base = design.eye_safety.time_base;
    EyeSearch found;
    double worst = -1;
    const std::vector<Corner> corners = tolerance_corners(design);
    for (const Corner& corner : corners) {
        LightSource light = light_source(corner.design, array, plan_firing(corner.design, array));
        found = search_exposure(light, {LaserClass::class_1, time_base}, std::move(found), progress);
        if (found.worst_ratio() <= worst) continue;
        worst = found.worst_ratio();
        verdict.light = std::move(light), verdict.corner = corner.name, verdict.worst_design = corner.design;
    }
    verdict.corners = corners.size();
    verdict.work = found.work;
    verdict.criteria = exposure_cases(found);
    verdict.worst_ratio = found.bound();
    verdict.margin = 1 - verdict.worst_ratio;
    verdict.laser_class = classify(verdict.light, found, time_base, Accuracy::fine, progress);

    const EyeSafetyRequirement asked = asked_of(design);
    verdict.asked = class_of(asked.laser_class);
    verdict.asked_margin = asked.margin;
    verdict.asked_ratio = verdict.worst_ratio;
    if (verdict.asked != LaserClass::class_1) {
        const ExposureQuestion question{verdict.asked,
                                        time_base_of(verdict.asked, verdict.light.wavelength, time_base),
                                        conditions_of(verdict.asked)};
        verdict.asked_ratio = search_exposure(verdict.light, question, {}, progress).bound();
    }
    if (verdict.asked_ratio > 0) {
        const double scale = (1 - asked.margin) / verdict.asked_ratio;
        const FiringPlan& plan = verdict.light.plan;
        verdict.largest_shot_energy =
            scale * shot_power(plan, array, verdict.worst_design.drive.peak_power) * plan.pulse_width;
        verdict.largest_average_power =
            scale * average_power(plan, array, verdict.worst_design.drive.peak_power);
    }
    if (verdict.worst_ratio > 1) {
        const Vec3 worst_eye = verdict.criteria.front().eye;
        verdict.hazard_distance =
            search_hazard_distance(verdict.light, Condition::naked_eye, time_base, worst_eye, progress);
        verdict.aided_hazard_distance =
            search_hazard_distance(verdict.light, Condition::telescope, time_base, worst_eye, progress);
    }
    verdict.found = std::move(found);
    return verdict;
}

void judge_faults(SafetyVerdict& verdict, const EmitterArray& array, const Progress& progress) {
    for (const Fault& fault : verdict.worst_design.eye_safety.faults.list)
        verdict.faults.push_back(judge_fault(verdict.worst_design, array, fault, verdict.asked, progress));
}

}  // namespace glint
