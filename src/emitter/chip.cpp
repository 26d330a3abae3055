// The chip at work: the balance of light and heat under the firing plan.
#include <glint/core/error.h>
#include <glint/core/parallel.h>
#include <glint/core/quantity.h>
#include <glint/emitter/chip.h>
#include <glint/emitter/layout.h>

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <cmath>
#include <utility>

namespace glint {
namespace {

// Rise of one emitter at the end of the last of n pulses, per watt of its own heat in them, above the average
// over frames [K/W]. The pulses add Z(k Tr + tp) - Z(k Tr); beyond the first thousand that is at most D times
// what Z grows, as Z is concave. Earlier frames count as steady heat from one frame ago on: they are in the
// average, which counts D' Z(frame) too much.
double own_dwell_rise(double diameter, const Substrate& substrate, double steady, const FiringPlan& plan,
                      double frame_duty) {
    constexpr int one_by_one = 1000;
    const auto Z = [&](double time) { return junction_step(diameter, substrate, time, steady); };
    const double tp = plan.pulse_width, Tr = plan.shot_period;
    const int shots = std::min(plan.shots, one_by_one);
    double rise = 0;
    for (int k = 0; k < shots; ++k) rise += pulse_rise(diameter, substrate, tp, k * Tr + tp, steady);
    rise += tp / Tr * (Z((plan.shots - 1) * Tr + tp) - Z((shots - 1) * Tr + tp));
    return std::max(0.0, rise - frame_duty * Z(plan.frame_period));
}

// What one emitter leaves at another of its dwell, per watt of heat in its pulses, above the average over
// frames [K/W]: heat that is steady over the dwell. Tabulated over the logarithm of the distance, to 1e-5;
// times the distance it is smooth.
class NeighbourRise {
public:
    NeighbourRise(const ChipModel& model, const FiringPlan& plan, double nearest, double farthest)
        : from_(std::log(nearest)), step_((std::log(farthest) - from_) / (nodes - 1)) {
        const double duty = plan.pulse_width / plan.shot_period;
        const double dwell = (plan.shots - 1) * plan.shot_period + plan.pulse_width;
        for (int i = 0; i < nodes; ++i) {
            const double distance = std::exp(from_ + i * step_), slab = coupling(distance, model.substrate);
            const auto step = [&](double time) {
                return std::min(slab, point_step(model.substrate, distance, time));
            };
            const double above = duty * step(dwell) - model.duty * step(plan.frame_period);
            product_[i] = distance * std::max(0.0, above);
        }
    }

    [[nodiscard]] double operator()(double distance) const {
        const double at = std::max(0.0, (std::log(distance) - from_) / step_);
        const int i = std::min(static_cast<int>(at), nodes - 2);
        return (product_[i] + (at - i) * (product_[i + 1] - product_[i])) / distance;
    }

private:
    static constexpr int nodes = 1024;
    double from_, step_;
    std::array<double, nodes> product_;
};

// Rise at every emitter of a dwell by the others that fire with it.
void add_neighbours(std::vector<double>& rise, const std::vector<int>& together, const EmitterArray& array,
                    const ChipModel& model, const FiringPlan& plan, const NeighbourRise& neighbour) {
    constexpr std::size_t many = 512;
    if (together.size() > many) {
        // Too many for pairs: what the dwell would reach if it lasted, which is more.
        std::vector<double> heat(array.size(), 0.0);
        for (const int i : together) heat[i] = plan.pulse_width / plan.shot_period - model.duty;
        const std::vector<double> others = model.coupling.rise_of(heat);
        for (const int i : together) rise[i] += others[i];
        return;
    }
    for (std::size_t a = 0; a < together.size(); ++a)
        for (std::size_t b = 0; b < a; ++b) {
            const int i = together[a], j = together[b];
            const double added = neighbour((array.positions[i] - array.positions[j]).norm());
            rise[i] += added, rise[j] += added;
        }
}

// Half way up a dwell.
Steady middle_of(const ChipModel& model, double current, std::size_t emitter, double average_temperature) {
    return steady(model.diode.model, current, average_temperature, model.dwell_rise[emitter] / 2);
}

// The most that a diode sends at any temperature of a range; it may rise and fall again in between.
double brightest(const DiodeModel& diode, double current, double coldest, double hottest) {
    constexpr int steps = 32;
    double most = 0;
    for (int i = 0; i <= steps; ++i)
        most = std::max(most, operate(diode, current, coldest + (hottest - coldest) * i / steps).power);
    return most;
}

// The largest mean power between two currents, by golden section.
ChipState state_of_largest_power(const ChipModel& model, double from, double to) {
    constexpr double golden = 0.6180339887498949;
    while (to - from > 1e-4 * to) {
        const double left = to - golden * (to - from), right = from + golden * (to - from);
        if (mean_power(chip_state(model, left)) < mean_power(chip_state(model, right)))
            from = left;
        else
            to = right;
    }
    return chip_state(model, (from + to) / 2);
}

// Between `low`, which gives less, and `high`, which gives enough: false position, the weight of an end that
// stays halved each time (Illinois; Dowell and Jarratt 1971).
ChipState state_between(const ChipModel& model, const ChipState& low, ChipState high, double power) {
    constexpr double close = 1e-9;
    double a = low.current, f_a = mean_power(low) - power, b = high.current, f_b = mean_power(high) - power;
    int stays = 0;  // how often in a row a: +, b: -
    for (int round = 0; round < 100 && mean_power(high) - power > close * power; ++round) {
        ChipState middle = chip_state(model, (a * f_b - b * f_a) / (f_b - f_a));
        const double f = mean_power(middle) - power;
        if (f >= 0) {
            b = middle.current, f_b = f, high = std::move(middle), stays = std::max(1, stays + 1);
            if (stays > 1) f_a /= 2;
        } else {
            a = middle.current, f_a = f, stays = std::min(-1, stays - 1);
            if (stays < -1) f_b /= 2;
        }
    }
    return high;
}

}  // namespace

DiodePreset diode_of(const Emitters& emitters) {
    const DiodeSettings& given = emitters.diode;
    DiodePreset diode = diode_preset(emitters.aperture, emitters.wavelength, given.junctions);
    DiodeModel& model = diode.model;
    const auto take = [](double& member, const std::optional<double>& value) {
        member = value.value_or(member);
    };
    take(model.threshold, given.threshold),
        take(model.threshold_best_temperature, given.threshold_temperature);
    take(model.threshold_width, given.threshold_width), take(model.slope, given.slope);
    take(model.slope_fall, given.slope_fall), take(model.voltage, given.voltage);
    take(model.resistance, given.resistance);
    diode.outside_fit =
        diode.outside_fit && !(given.threshold && given.slope && given.voltage && given.resistance);
    return diode;
}

Substrate substrate_of(const HeatSettings& heat) {
    // The heat capacity per volume stays that of gallium arsenide, see Substrate.
    return {.conductivity = heat.conductivity,
            .thickness = heat.substrate_thickness,
            .diffusivity = heat.conductivity / 46 * Substrate{}.diffusivity,
            .self_conductivity = heat.self_conductivity,
            .pulse_heating = heat.pulse_heating};
}

ChipModel chip_model(const Design& design, const EmitterArray& array, const FiringPlan& firing) {
    FiringPlan plan = firing;
    plan.pulse_width = equivalent_width(design.drive.shape, plan.pulse_width);
    const HeatSettings& heat = design.emitters.heat;
    const Substrate substrate = substrate_of(heat);
    const double aperture = design.emitters.aperture, self = self_resistance(aperture, substrate);
    const double duty = plan.shots * plan.pulse_width / plan.frame_period;
    ChipModel model{.diode = diode_of(design.emitters),
                    .substrate = substrate,
                    .coupling = HeatCoupling(array.positions, substrate, heat.package_resistance),
                    .sink_temperature = heat.sink_temperature,
                    .self_resistance = self,
                    .duty = duty,
                    .dwell_rise = std::vector<double>(array.size(),
                                                      own_dwell_rise(aperture, substrate, self, plan, duty))};
    const ZoneMembers members = members_of(array);
    std::vector<std::vector<int>> dwells(static_cast<std::size_t>(plan.dwells()));
    for (int dwell = 0; dwell < plan.dwells(); ++dwell)
        for (const int zone : plan.zones_of(dwell))
            dwells[dwell].insert(dwells[dwell].end(), members.members.begin() + members.first[zone],
                                 members.members.begin() + members.first[zone + 1]);
    // Each emitter fires in one dwell, so dwells write to different places.
    if (array.size() < 2) return model;
    Vec2 low = array.positions.front(), high = low;
    for (const Vec2& place : array.positions) low = low.cwiseMin(place), high = high.cwiseMax(place);
    const NeighbourRise neighbour(model, plan, nearest_distance(array.positions),
                                  1.001 * (high - low).norm());
    parallel_for(dwells.size(), [&](std::size_t dwell) {
        add_neighbours(model.dwell_rise, dwells[dwell], array, model, plan, neighbour);
    });
    return model;
}

ChipState chip_state(const ChipModel& model, double current) {
    const std::size_t count = model.coupling.size();
    const HeatAt heat_at = [&](std::size_t emitter, double temperature) {
        return model.duty * middle_of(model, current, emitter, temperature).at.heat;
    };
    const ChipTemperatures balance =
        solve_chip(model.coupling, heat_at,
                   {.sink_temperature = model.sink_temperature, .self_resistance = model.self_resistance});
    ChipState state{.current = current,
                    .emitters = std::vector<EmitterState>(count),
                    .settled = balance.settled,
                    .iterations = balance.iterations};
    for (std::size_t i = 0; i < count && state.settled; ++i) {
        EmitterState& emitter = state.emitters[i];
        emitter.average_temperature = balance.temperature[i];
        const Steady middle = middle_of(model, current, i, balance.temperature[i]);
        emitter.power = middle.at.power, emitter.voltage = middle.at.voltage, emitter.heat = middle.at.heat;
        emitter.last_temperature = balance.temperature[i] + model.dwell_rise[i] * middle.at.heat;
        state.settled = !middle.runaway && emitter.last_temperature < runaway_temperature;
        if (!state.settled) break;
        emitter.first_power = operate(model.diode.model, current, balance.temperature[i]).power;
        emitter.last_power = operate(model.diode.model, current, emitter.last_temperature).power;
        emitter.brightest =
            brightest(model.diode.model, current, model.sink_temperature, emitter.last_temperature);
    }
    return state;
}

double mean_power(const ChipState& state) {
    double sum = 0;
    for (const EmitterState& emitter : state.emitters) sum += emitter.power;
    return state.settled ? sum / static_cast<double>(state.emitters.size()) : 0;
}

ChipState chip_state_for_power(const ChipModel& model, double power) {
    constexpr double growth = 1.15;
    const DiodeModel& diode = model.diode.model;
    // Upwards from what a cold diode needs, until there is enough or it becomes less.
    ChipState before = chip_state(model, diode.threshold), low = before;
    ChipState high = chip_state(model, diode.threshold + power / diode.slope);
    while (mean_power(high) < power && mean_power(high) > mean_power(low))
        before = std::exchange(low, std::exchange(high, chip_state(model, growth * high.current)));
    if (mean_power(high) < power) {
        high = state_of_largest_power(model, before.current, high.current);
        if (mean_power(high) < power)
            throw Error(Problem{
                .what = fmt::format("the diodes roll over at {} each, at a current of {}",
                                    show_quantity(mean_power(high), Kind::power),
                                    show_quantity(high.current, Kind::current)),
                .accepted =
                    "less peak_power, shorter pulses or fewer of them, a larger aperture, more junctions "
                    "or better cooling",
                .path = "drive/peak_power"});
        low = std::move(before);
    }
    return state_between(model, low, std::move(high), power);
}

}  // namespace glint
