// Prints the verdict on eye safety for programs.
#include "report/safety_json.h"

#include <glint/report/safety_page.h>
#include <glint/safety/caution.h>
#include <glint/safety/domain.h>

#include <cmath>
#include <nlohmann/json.hpp>

namespace glint {
namespace {

using Json = nlohmann::ordered_json;

// JSON has no infinity: an eye that is relaxed has the focus null.
Json number(double value) { return std::isfinite(value) ? Json(value) : Json(nullptr); }

// "1M" of "Class 1M".
std::string short_name(LaserClass laser_class) { return std::string(name_of(laser_class)).substr(6); }

Json json_of(const ExposureCase& each) {
    return {{"criterion", name_of(each.criterion)},
            {"condition", each.condition == Condition::telescope ? 1 : 3},
            {"mechanism", name_of(each.mechanism)},
            {"duration_s", each.duration},
            {"pulses", each.pulses},
            {"C5", each.C5},
            {"C6", each.C6},
            {"subtense_rad", each.subtense},
            {"part_rad", {each.part_low.x(), each.part_low.y(), each.part_high.x(), each.part_high.y()}},
            {"ae_J", each.ae},
            {"ael_J", each.ael},
            {"ratio", each.ratio()},
            {"zones", each.zones},
            {"eye_m", {each.eye.x(), each.eye.y(), each.eye.z()}},
            {"focus_m", number(each.focus)}};
}

Json json_of(const FaultVerdict& fault) {
    return {{"name", fault.name},
            {"class", short_name(fault.laser_class)},
            {"worst_ratio", fault.worst_ratio},
            {"holds", fault.holds},
            {"reaction_time_s", fault.reaction_time ? Json(*fault.reaction_time) : Json(nullptr)},
            {"governing", fault.governing ? json_of(*fault.governing) : Json(nullptr)}};
}

}  // namespace

void to_json(Json& json, const SafetyVerdict& verdict) {
    json["caution"] = caution_paragraph;
    json["class"] = short_name(verdict.laser_class);
    json["notes"] = Json::array();
    if (touches(second_limit_wavelengths, verdict.light.wavelength))
        json["notes"].push_back(second_limit_note);
    json["worst_ratio"] = verdict.worst_ratio;
    json["margin"] = verdict.margin;
    json["tolerance_corner"] = verdict.corner;
    json["governing"] = verdict.criteria.empty() ? Json(nullptr) : json_of(verdict.criteria.front());
    json["criteria"] = Json::array();
    for (const ExposureCase& each : verdict.criteria) json["criteria"].push_back(json_of(each));
    json["asked_class"] = short_name(verdict.asked);
    json["asked_ratio"] = verdict.asked_ratio;
    json["faults"] = Json::array();
    for (const FaultVerdict& fault : verdict.faults) json["faults"].push_back(json_of(fault));
    json["hazard_distance_m"] = verdict.hazard_distance;
    json["aided_hazard_distance_m"] = verdict.aided_hazard_distance;
    json["largest_shot_energy_J"] = verdict.largest_shot_energy;
    json["largest_average_power_W"] = verdict.largest_average_power;
}

std::string safety_json(const SafetyVerdict& verdict) {
    Json json;
    to_json(json, verdict);
    return json.dump(2) + "\n";
}

}  // namespace glint
