// Single faults: what each does to the class, and how fast the light must be cut so that it holds.
#include <glint/safety/classify.h>
#include <glint/safety/faults.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>
#include <numeric>

namespace glint {
namespace {

constexpr double precision = 1.02;

template <class... Visitors>
struct Overloaded : Visitors... {
    using Visitors::operator()...;
};

bool is_kind(const OpticalElement& element, ElementKind kind) {
    switch (kind) {
        case ElementKind::lens:
            return std::holds_alternative<Lens>(element);
        case ElementKind::fan_out:
            return std::holds_alternative<FanOut>(element);
        case ElementKind::diffuser:
            return std::holds_alternative<Diffuser>(element);
    }
    return false;
}

// Each zone shines on its own for a time, so far apart that the time base holds one of them only.
FiringPlan stuck_on(int zones, double lasting, double time_base) {
    FiringPlan plan{.zones = std::vector<int>(static_cast<std::size_t>(zones)),
                    .start = {},
                    .zones_at_once = 1,
                    .shots = 1,
                    .shot_period = lasting,
                    .pulse_width = lasting,
                    .frame_period = 0};
    std::iota(plan.zones.begin(), plan.zones.end(), 0);
    const double apart = 10 * std::max(lasting, time_base);
    for (int zone = 0; zone < zones; ++zone) plan.start.push_back(zone * apart);
    plan.frame_period = zones * apart;
    return plan;
}

FiringPlan all_at_once(FiringPlan plan) {
    std::ranges::sort(plan.zones);
    plan.zones_at_once = static_cast<int>(plan.zones.size());
    // One dwell stands for all, at the time of each: the closest two follow each other as those of the plan
    // do.
    const double step = plan.dwells() > 1 ? plan.start[1] - plan.start[0] : plan.frame_period;
    plan.start = {0};
    plan.frame_period = step;
    return plan;
}

FiringPlan longer_pulses(FiringPlan plan, double factor) {
    plan.pulse_width = std::min(plan.pulse_width * factor, plan.shot_period);
    return plan;
}

FiringPlan faster(FiringPlan plan, double factor) {
    const double possible = std::min(factor, plan.shot_period / plan.pulse_width);
    plan.shot_period /= possible, plan.frame_period /= possible;
    for (double& start : plan.start) start /= possible;
    return plan;
}

// What the asked class finds within a time, from a place and focus on or everywhere.
struct Judge {
    const Design& design;
    const EmitterArray& array;
    const Fault& fault;
    LaserClass asked;
    const Progress& progress;

    [[nodiscard]] LightSource light(double lasting) const {
        return faulty_light(design, array, fault, lasting);
    }
    [[nodiscard]] double time_base(double within) const {
        return time_base_of(asked, design.emitters.wavelength, within);
    }

    [[nodiscard]] EyeSearch everywhere(double within, double enough, const Ratios& known) const {
        EyeSearch before;
        before.known = known;
        return search_exposure(light(within),
                               {asked, time_base(within), conditions_of(asked), enough, Accuracy::coarse},
                               std::move(before), progress);
    }

    // Whether a case that is too much over a longer time still is within a shorter one.
    [[nodiscard]] bool too_much(const EyeCase& found, double within) const {
        const LightSource source = light(within);
        const double limit = limit_of_search(source, Accuracy::coarse);
        EyeSearch before;
        before.known.fill(limit);
        const std::array places{found.eye.place};
        for (const TimePattern& pattern : patterns_of(source, asked, time_base(within))) {
            before = search_eyes_at(
                {pattern, source.field, found.condition, source.closest_access, limit, Accuracy::coarse},
                places, std::move(before), progress);
            if (before.worst_ratio() > limit) return true;
        }
        return false;
    }
};

const EyeCase& worst_of(const EyeSearch& found) {
    return *std::ranges::max_element(found.worst, {},
                                     [](const EyeCase& each) { return each.part.worst.ratio; });
}

// Shortens the time until no place gives too much. Each round takes the worst case found, finds out how short
// the time must be at its place, and looks everywhere again.
std::optional<double> reaction_time(const Judge& judge, EyeCase worst, double too_long) {
    const double one_shot =
        judge.light(too_long).plan.pulse_width < too_long ? judge.light(too_long).plan.pulse_width : 1e-9;
    const double limit = limit_of_search(judge.light(too_long), Accuracy::coarse);
    Ratios from_the_limit;
    from_the_limit.fill(limit);
    for (int round = 0; round < 40; ++round) {
        if (judge.too_much(worst, one_shot)) return std::nullopt;
        double low = one_shot, high = too_long;
        while (high / low > precision) {
            const double middle = std::sqrt(low * high);
            (judge.too_much(worst, middle) ? high : low) = middle;
        }
        const EyeSearch rest = judge.everywhere(low, limit, from_the_limit);
        if (rest.worst_ratio() <= limit) return low;
        worst = worst_of(rest), too_long = low;
    }
    return std::nullopt;
}

}  // namespace

std::string name_of(const Fault& fault) {
    return std::visit(
        Overloaded{
            [](const ElementMissing& each) {
                constexpr std::string_view names[] = {"lens", "fan-out", "diffuser"};
                return fmt::format("{} missing or cracked", names[static_cast<int>(each.element)]);
            },
            [](const ZoneStuckOn&) { return std::string("a zone stuck on"); },
            [](const AllZonesAtOnce&) { return std::string("all zones at once"); },
            [](const PulseTooLong& each) { return fmt::format("pulses {:g} times too long", each.factor); },
            [](const RepetitionTooHigh& each) {
                return fmt::format("repetition {:g} times too high", each.factor);
            },
            [](const OverCurrent& each) {
                return fmt::format("over-current, {:g} times the power", each.factor);
            }},
        fault);
}

LightSource faulty_light(const Design& design, const EmitterArray& array, const Fault& fault,
                         double lasting) {
    Design changed = design;
    FiringPlan plan = plan_firing(design, array);
    std::visit(Overloaded{[&](const ElementMissing& each) {
                              std::erase_if(changed.optics.elements, [&](const OpticalElement& element) {
                                  return is_kind(element, each.element);
                              });
                          },
                          [&](const ZoneStuckOn&) { plan = stuck_on(array.zones, lasting, lasting); },
                          [&](const AllZonesAtOnce&) { plan = all_at_once(plan); },
                          [&](const PulseTooLong& each) { plan = longer_pulses(plan, each.factor); },
                          [&](const RepetitionTooHigh& each) { plan = faster(plan, each.factor); },
                          [&](const OverCurrent& each) { changed.drive.peak_power *= each.factor; }},
               fault);
    return light_source(changed, array, plan);
}

FaultVerdict judge_fault(const Design& design, const EmitterArray& array, const Fault& fault,
                         LaserClass asked, const Progress& progress) {
    const Judge judge{design, array, fault, asked, progress};
    const double time_base = design.eye_safety.time_base;
    FaultVerdict verdict{.name = name_of(fault), .reaction_time = {}, .governing = {}};
    const EyeSearch found = judge.everywhere(time_base, 1e300, {});
    verdict.worst_ratio = found.bound();
    const std::vector<ExposureCase> cases = exposure_cases(found);
    if (!cases.empty()) verdict.governing = cases.front();
    verdict.holds = verdict.worst_ratio <= 1;
    const LightSource light = judge.light(time_base);
    verdict.laser_class =
        verdict.holds && asked == LaserClass::class_1 ? LaserClass::class_1
        : asked == LaserClass::class_1
            ? classify(light, found, time_base, Accuracy::coarse, progress)
            : classify(light,
                       search_exposure(light, {.time_base = time_base, .accuracy = Accuracy::coarse}, {},
                                       progress),
                       time_base, Accuracy::coarse, progress);
    verdict.reaction_time = verdict.holds ? time_base : reaction_time(judge, worst_of(found), time_base);
    return verdict;
}

}  // namespace glint
