// Requirements held against what was got, one function a kind.
#include <glint/core/error.h>
#include <glint/core/text.h>
#include <glint/plan/requirements.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>
#include <limits>
#include <map>

namespace glint {
namespace {

struct Context {
    const Design& design;
    const Assessment& assessment;
    const Link& link;
    std::span<const PixelLight> lights;
    std::vector<ReachSummary>& reaches;  // filled by the range requirements
};

// Beyond ten times the bound the figure says no more than that there is plenty.
std::string percent(double share) { return share > 9.99 ? "> 999 %" : fmt::format("{:+.0f} %", 100 * share); }

// Room above a lower bound, or below an upper one, relative to the bound.
std::string room_above(double got, double needed) { return percent(got / needed - 1); }
std::string room_below(double got, double needed) {
    return std::isfinite(got) ? percent(1 - got / needed) : "-";
}

std::vector<PixelReach> reaches(const Context& context, const RangeRequirement& range) {
    std::vector<PixelReach> list(context.lights.size());
    parallel_for(list.size(), [&](std::size_t i) {
        list[i] = reach(context.link, context.lights[i], range.reflectance, range.probability);
    });
    return list;
}

std::vector<double> distances(const std::vector<PixelReach>& list) {
    std::vector<double> result;
    for (const PixelReach& each : list) result.push_back(each.distance);
    return result;
}

// What stops most of the pixels that decide: those that do not get beyond the distance got.
std::string common_limit(const std::vector<PixelReach>& list, double got) {
    std::map<RangeLimit, int> counts;
    for (const PixelReach& each : list)
        if (each.distance <= got * (1 + 1e-9)) ++counts[each.limit];
    const auto most = std::ranges::max_element(counts, {}, [](const auto& entry) { return entry.second; });
    return most == counts.end() ? "" : name_of(most->first);
}

RequirementResult judge(const Context& context, const RangeRequirement& range) {
    const std::vector<PixelReach> list = reaches(context, range);
    const std::vector<double> far = distances(list);
    context.reaches.push_back({.reflectance = range.reflectance,
                               .probability = range.probability,
                               .shortest = reached_by_share(far, 1),
                               .median = reached_by_share(far, 0.5),
                               .longest = reached_by_share(far, 0)});
    const double got = reached_by_share(far, range.share);
    return {.name = fmt::format("Range at {}", show_quantity(range.reflectance, Kind::ratio)),
            .unit = "m",
            .needed = range.distance,
            .got = got,
            .needed_text = fmt::format("{}, {} of pixels", show_quantity(range.distance, Kind::length),
                                       show_quantity(range.share, Kind::ratio)),
            .got_text = show_quantity(got, Kind::length),
            .margin_text = room_above(got, range.distance),
            .limited_by = common_limit(list, got),
            .met = got >= range.distance};
}

RequirementResult judge(const Context& context, const PrecisionRequirement& precision) {
    std::vector<double> spreads(context.lights.size());
    bool background = false;
    parallel_for(spreads.size(), [&](std::size_t i) {
        const PixelLight& light = context.lights[i];
        const Detection detection =
            detect_target(context.link, light, {precision.reflectance, precision.distance});
        // A precision without a detection is worth nothing.
        spreads[i] =
            detection.probability >= 0.5 ? -detection.precision : -std::numeric_limits<double>::infinity();
    });
    const double got = -reached_by_share(spreads, precision.share);
    if (std::isfinite(got)) {
        const auto middle = std::ranges::max_element(context.lights, {}, &PixelLight::intensity);
        const Detection detection =
            detect_target(context.link, *middle, {precision.reflectance, precision.distance});
        background = detection.background > detection.signal;
    }
    return {.name = fmt::format("Precision at {}", show_quantity(precision.distance, Kind::length)),
            .unit = "m",
            .needed = precision.limit,
            .got = got,
            .needed_text = fmt::format("{}, {} of pixels", show_quantity(precision.limit, Kind::length),
                                       show_quantity(precision.share, Kind::ratio)),
            .got_text = std::isfinite(got) ? show_quantity(got, Kind::length) : "not detected",
            .margin_text = room_below(got, precision.limit),
            .limited_by = std::isfinite(got) ? (background ? "background light" : "signal") : "detection",
            .met = got <= precision.limit};
}

RequirementResult judge(const Context& context, const FrameRateRequirement& rate) {
    const FiringPlan& plan = context.assessment.plan;
    const double got = 1 / plan.frame_period;
    const double busy = plan.dwells() * (plan.dwell_length() + context.design.firing.gap) / plan.frame_period;
    return {.name = "Frame rate",
            .unit = "Hz",
            .needed = rate.minimum,
            .got = got,
            .needed_text = show_quantity(rate.minimum, Kind::frequency),
            .got_text = show_quantity(got, Kind::frequency),
            .margin_text = room_above(got, rate.minimum),
            .limited_by = busy > 0.999 ? fmt::format("{} dwells of {}", plan.dwells(),
                                                     show_quantity(plan.dwell_length(), Kind::time))
                                       : "frame period",
            .met = got >= rate.minimum * (1 - 1e-12)};
}

RequirementResult judge(const Context& context, const EyeSafetyRequirement& safety) {
    constexpr LaserClass asked[] = {LaserClass::class_1,  LaserClass::class_1M, LaserClass::class_2,
                                    LaserClass::class_2M, LaserClass::class_3R, LaserClass::class_3B};
    const LaserClass wanted = asked[static_cast<int>(safety.laser_class)];
    const SafetyVerdict& verdict = context.assessment.safety;
    const bool class_held = static_cast<int>(verdict.laser_class) <= static_cast<int>(wanted);
    // The ratio is known for the strictest class asked for; a laxer one that holds has more room than is
    // shown.
    const double ratio = wanted == verdict.asked ? verdict.asked_ratio : verdict.worst_ratio;
    const bool margin_held = wanted != verdict.asked || ratio <= 1 - safety.margin;
    const ExposureCase* governing = verdict.criteria.empty() ? nullptr : &verdict.criteria.front();
    return {.name = "Eye safety, AE/AEL",
            .unit = "",
            .needed = 1 - safety.margin,
            .got = ratio,
            .needed_text = fmt::format("{}, up to {:.2f}", name_of(wanted), 1 - safety.margin),
            .got_text = fmt::format("{}, {:.3g}", name_of(verdict.laser_class), ratio),
            .margin_text = percent(1 - ratio),
            .limited_by = governing == nullptr ? ""
                                               : fmt::format("{}, {}", name_of(governing->criterion),
                                                             name_of(governing->condition)),
            .met = class_held && margin_held};
}

RequirementResult judge(const Context& context, const PointsRequirement& points) {
    const auto& names = context.assessment.object_names;
    std::size_t got = 0;
    for (std::size_t i = 0; i < names.size(); ++i)
        if (names[i] == points.object) got += context.assessment.points_on_object[i];
    return {.name = fmt::format("Points on {}", points.object),
            .unit = "",
            .needed = static_cast<double>(points.minimum),
            .got = static_cast<double>(got),
            .needed_text = fmt::format("{}", points.minimum),
            .got_text = fmt::format("{}", got),
            .margin_text = room_above(static_cast<double>(got), points.minimum),
            .limited_by = got == 0 ? "not seen, or too weak" : "pixels on it",
            .met = got >= static_cast<std::size_t>(points.minimum)};
}

RequirementResult judge(const Context& context, const AveragePowerRequirement& power) {
    const double got = context.assessment.average_power;
    return {.name = "Average optical power",
            .unit = "W",
            .needed = power.maximum,
            .got = got,
            .needed_text = "up to " + show_quantity(power.maximum, Kind::power),
            .got_text = show_quantity(got, Kind::power),
            .margin_text = room_below(got, power.maximum),
            .limited_by = "peak power, pulse width, shots a second",
            .met = got <= power.maximum};
}

const char* element_of(const Requirement& requirement) {
    constexpr const char* names[] = {"range",      "precision", "frame_rate",
                                     "eye_safety", "points",    "average_power"};
    return names[requirement.index()];
}

}  // namespace

JudgedRequirements judge_requirements(const Design& design, const Assessment& assessment, const Link& link,
                                      std::span<const PixelLight> lights) {
    JudgedRequirements judged;
    const Context context{design, assessment, link, lights, judged.reaches};
    std::map<std::string, int> seen;
    for (const Requirement& requirement : design.requirements.list) {
        const int occurrence = ++seen[element_of(requirement)];
        std::string path = fmt::format("requirements/{}", element_of(requirement));
        if (occurrence > 1) path += fmt::format("[{}]", occurrence);
        if (const auto* points = std::get_if<PointsRequirement>(&requirement))
            if (std::ranges::find(assessment.object_names, points->object) == assessment.object_names.end())
                throw Error(Problem{.what = fmt::format("the scene has no object '{}'", points->object),
                                    .accepted = join_or(assessment.object_names),
                                    .path = path + "/object"});
        judged.results.push_back(
            std::visit([&](const auto& each) { return judge(context, each); }, requirement));
        judged.results.back().path = path;
    }
    return judged;
}

}  // namespace glint
