// The firing plan: which zones fire when, over one frame.
#include <glint/core/error.h>
#include <glint/core/quantity.h>
#include <glint/emitter/chip.h>
#include <glint/emitter/firing.h>
#include <glint/emitter/firing_order.h>

#include <fmt/format.h>
#include <algorithm>

namespace glint {

std::span<const int> FiringPlan::zones_of(int dwell) const {
    const std::size_t first = static_cast<std::size_t>(dwell) * zones_at_once;
    return std::span(zones).subspan(first, std::min<std::size_t>(zones_at_once, zones.size() - first));
}

FiringPlan plan_firing(const Design& design, const EmitterArray& array) {
    const Firing& firing = design.firing;
    if (firing.zones_at_once > array.zones)
        throw Error(Problem{
            .what = fmt::format("{} zones at once, but there are only {}", firing.zones_at_once, array.zones),
            .accepted = fmt::format("1 to {}", array.zones),
            .path = "firing/zones_at_once"});
    const AddressingScheme scheme = design.emitters.addressing.scheme;
    FiringPlan plan{.zones = order_zones(firing, array, substrate_of(design.emitters.heat), scheme),
                    .start = {},
                    .zones_at_once = firing.zones_at_once,
                    .shots = firing.shots,
                    .shot_period = 1 / firing.repetition,
                    .pulse_width = design.drive.pulse_width,
                    .frame_period = 0};
    const int dwells = (array.zones + firing.zones_at_once - 1) / firing.zones_at_once;
    const double step = firing.shots / firing.repetition + firing.gap;
    for (int d = 0; d < dwells; ++d) plan.start.push_back(d * step);
    if (scheme == AddressingScheme::matrix)
        for (int d = 0; d < dwells; ++d)
            if (!matrix_can_fire(plan.zones_of(d), array.zone_columns))
                throw Error(Problem{
                    .what = fmt::format("a row-by-column matrix cannot fire the {} zones of dwell {} alone",
                                        plan.zones_of(d).size(), d),
                    .accepted = fmt::format("a divisor of {0} or a multiple of {0} that divides {1}",
                                            array.zone_columns, array.zones),
                    .path = "firing/zones_at_once"});
    const double needed = dwells * step;
    plan.frame_period = firing.frame_period.value_or(needed);
    if (plan.frame_period < needed * (1 - 1e-12))
        throw Error(Problem{.what = fmt::format("the frame lasts {}, but its {} dwells take {}",
                                                show_quantity(plan.frame_period, Kind::time, 4), dwells,
                                                show_quantity(needed, Kind::time, 4)),
                            .accepted = fmt::format("at least {}, or fewer shots, or more zones at once",
                                                    show_quantity(needed, Kind::time, 4)),
                            .path = "firing/frame_period"});
    return plan;
}

double average_power(const FiringPlan& plan, const EmitterArray& array, double peak_power) {
    // Every emitter fires in exactly one dwell of the frame.
    return static_cast<double>(array.size()) * peak_power * plan.pulse_width * plan.shots / plan.frame_period;
}

}  // namespace glint
