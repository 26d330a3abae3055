// summary.json.
#include "report/safety_json.h"

#include <glint/core/version.h>
#include <glint/optics/receiver.h>
#include <glint/report/safety_page.h>
#include <glint/report/tables.h>
#include <glint/safety/caution.h>

#include <fmt/format.h>
#include <cmath>
#include <nlohmann/json.hpp>

namespace glint {
namespace {

using Json = nlohmann::ordered_json;

// JSON has no infinity: what is not finite is null.
Json number(double value) { return std::isfinite(value) ? Json(value) : Json(nullptr); }

std::string with_unit(const std::string& key, const std::string& unit) {
    return unit.empty() ? key : key + "_" + unit;
}

Json requirements(const Assessment& assessment) {
    Json list = Json::array();
    for (const RequirementResult& each : assessment.requirements) {
        Json entry;
        entry["name"] = each.name;
        entry["path"] = each.path;
        entry["met"] = each.met;
        entry[with_unit("needed", each.unit)] = number(each.needed);
        entry[with_unit("got", each.unit)] = number(each.got);
        entry["limited_by"] = each.limited_by;
        list.push_back(std::move(entry));
    }
    return list;
}

Json chip(const Design& design, const Assessment& assessment) {
    Json json{{"wavelength_m", design.emitters.wavelength},
              {"emitters", assessment.array.size()},
              {"zones", assessment.array.zones},
              {"area_m2", assessment.packing.area},
              {"density_per_m2", assessment.packing.density},
              {"fill", assessment.packing.fill},
              {"nearest_m", assessment.packing.nearest},
              {"average_optical_power_W", assessment.average_power},
              {"channels", assessment.drivers.channels},
              {"pads", assessment.drivers.pads}};
    if (!assessment.chip) return json;
    const Chip& worked = *assessment.chip;
    json["current_A"] = worked.state.current;
    json["peak_power_W"] = mean_power(worked.state);
    json["electrical_power_W"] = worked.electrical_power;
    json["heat_W"] = worked.heat;
    json["hottest_zone"] = worked.hottest_zone;
    json["hottest_junction_K"] = worked.zone_temperature[worked.hottest_zone];
    json["droop"] = worked.droop;
    json["dwell_droop"] = worked.dwell_droop;
    json["channel_current_A"] = worked.driver.load.channel_current;
    json["supply_V"] = worked.driver.supply;
    json["rise_time_s"] = number(worked.driver.rise_time);
    json["supply_power_W"] = worked.driver.electrical_power;
    return json;
}

Json firing(const Assessment& assessment) {
    const FiringPlan& plan = assessment.plan;
    return {{"dwells", plan.dwells()},
            {"zones_at_once", plan.zones_at_once},
            {"shots", plan.shots},
            {"order_spacing", assessment.order.spacing},
            {"order_heat", assessment.order.heat},
            {"order_exposure", assessment.order.exposure},
            {"pulse_width_s", plan.pulse_width},
            {"shot_period_s", plan.shot_period},
            {"frame_period_s", plan.frame_period},
            {"frame_rate_Hz", 1 / plan.frame_period}};
}

Json light(const Assessment& assessment) {
    Json losses = Json::array();
    double lost = 0, landed = 0, escaped = 0;
    for (const Loss& loss : assessment.beams.losses) {
        losses.push_back({{"name", loss.name}, {"power_W", loss.power}});
        lost += loss.power;
    }
    for (const ZoneReport& zone : assessment.zones)
        landed += zone.landing.landed, escaped += zone.landing.escaped;
    return {{"emitted_peak_W", assessment.beams.emitted},
            {"in_beams_W", assessment.beams.emitted - lost},
            {"losses", losses},
            {"landed_on_scene_W", landed},
            {"escaped_W", escaped}};
}

Json ranging(const Design& design, const Assessment& assessment) {
    Json reaches = Json::array();
    for (const ReachSummary& reach : assessment.reaches)
        reaches.push_back({{"reflectance", reach.reflectance},
                           {"probability", reach.probability},
                           {"shortest_m", reach.shortest},
                           {"median_m", reach.median},
                           {"longest_m", reach.longest}});
    Json objects = Json::array();
    for (std::size_t i = 0; i < assessment.object_names.size(); ++i)
        objects.push_back({{"name", assessment.object_names[i]}, {"points", assessment.points_on_object[i]}});
    const Vec2 view = field_of_view(design.receiver);
    return {{"method", "photon counting"},
            {"field_of_view_rad", {view.x(), view.y()}},
            {"rays", assessment.returns.rays},
            {"rays_on_scene", assessment.returns.rays_hit},
            {"returns", assessment.returns.list.size()},
            {"points", assessment.points.size()},
            {"reach", reaches},
            {"objects", objects}};
}

}  // namespace

std::string summary_json(const Design& design, const Assessment& assessment) {
    Json summary;
    summary["caution"] = caution_paragraph;
    summary["format"] = 1;
    summary["program"] = fmt::format("glintplan {}", version());
    summary["design"] = design.name;
    summary["all_requirements_met"] = assessment.all_met();
    summary["requirements"] = requirements(assessment);
    summary["chip"] = chip(design, assessment);
    summary["firing"] = firing(assessment);
    summary["light"] = light(assessment);
    summary["eye_safety"] = assessment.safety;
    summary["ranging"] = ranging(design, assessment);
    summary["findings"] = assessment.findings;
    return summary.dump(2) + "\n";
}

}  // namespace glint
