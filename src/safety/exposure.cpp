// Exposure: the emission through one aperture over time, held against the pulse criteria.
#include <glint/safety/exposure.h>
#include <glint/safety/limits.h>

#include <algorithm>
#include <cmath>

namespace glint {
namespace {

double limit_of(const ExposureRules& rules, double duration) {
    const double within = std::clamp(duration, limit_durations.from, limit_durations.to);
    return class_limit(rules.laser_class, {.wavelength = rules.wavelength, .duration = within}).energy;
}

void keep_worse(ExposureCase& worst, ExposureCase candidate) {
    if (worst.ael <= 0 || candidate.ratio() > worst.ratio()) worst = std::move(candidate);
}

double last_pulse_end(const FiringPlan& plan, int dwell) {
    return plan.start[dwell] + (plan.shots - 1) * plan.shot_period + plan.pulse_width;
}

// Energy of the worst stretch of one dwell of a length, counting every pulse that starts within it.
double pulses_within(const FiringPlan& plan, double length) {
    return std::min<double>(plan.shots, std::floor(length / plan.shot_period * (1 + 1e-12)) + 1);
}

ExposureCase worst_single(const FiringPlan& plan, std::span<const DwellEnergy> dwells,
                          const ExposureRules& rules) {
    const auto strongest = std::ranges::max_element(dwells, {}, &DwellEnergy::energy);
    return {.criterion = PulseCriterion::single,
            .duration = plan.pulse_width,
            .ae = strongest->energy,
            .ael = limit_of(rules, plan.pulse_width)};
}

// Worst energy within Ti: every window that starts with a dwell and holds what follows within Ti.
ExposureCase worst_group(const FiringPlan& plan, std::span<const DwellEnergy> dwells,
                         const ExposureRules& rules) {
    const double ti = grouping_time(rules.wavelength);
    ExposureCase worst{.criterion = PulseCriterion::group, .duration = ti, .ael = limit_of(rules, ti)};
    for (std::size_t first = 0; first < dwells.size(); ++first) {
        double energy = 0, pulses = 0;
        for (std::size_t next = first; next < dwells.size(); ++next) {
            const double offset = plan.start[dwells[next].dwell] - plan.start[dwells[first].dwell];
            if (offset > ti) break;
            const double count = pulses_within(plan, ti - offset);
            energy += count * dwells[next].energy, pulses += count;
        }
        // A window may also open later in its dwell; one that holds the whole Ti of one dwell and all that
        // follows within Ti of its end is at most the sum of both.
        if (first + 1 < dwells.size()) {
            double follow = 0, follow_pulses = 0;
            for (std::size_t next = first + 1; next < dwells.size(); ++next) {
                const double offset =
                    plan.start[dwells[next].dwell] - last_pulse_end(plan, dwells[first].dwell);
                if (offset > ti) break;
                const double count = pulses_within(plan, ti - std::max(0.0, offset));
                follow += count * dwells[next].energy, follow_pulses += count;
            }
            const double own = pulses_within(plan, ti);
            if (follow > 0 && own * dwells[first].energy + follow > energy)
                energy = own * dwells[first].energy + follow, pulses = own + follow_pulses;
        }
        if (energy > worst.ae) worst.ae = energy, worst.pulses = pulses;
    }
    return worst;
}

ExposureCase worst_average(const FiringPlan& plan, std::span<const DwellEnergy> dwells,
                           const ExposureRules& rules) {
    ExposureCase worst{.criterion = PulseCriterion::average};
    const auto consider = [&](double duration, double energy, double pulses) {
        if (duration > rules.time_base || duration < plan.pulse_width) return;
        keep_worse(worst, {.criterion = PulseCriterion::average,
                           .duration = duration,
                           .pulses = pulses,
                           .ae = energy,
                           .ael = limit_of(rules, duration)});
    };
    double frame_energy = 0;
    for (const DwellEnergy& dwell : dwells) frame_energy += plan.shots * dwell.energy;
    const double count = static_cast<double>(dwells.size());
    // From the first pulse of one dwell to the last pulse of another, in the same frame or in the next.
    for (std::size_t first = 0; first < dwells.size(); ++first) {
        double energy = 0;
        for (std::size_t step = 0; step < 2 * dwells.size() - first; ++step) {
            const std::size_t last = (first + step) % dwells.size();
            const double later = first + step >= dwells.size() ? plan.frame_period : 0;
            energy += plan.shots * dwells[last].energy;
            consider(later + last_pulse_end(plan, dwells[last].dwell) - plan.start[dwells[first].dwell],
                     energy, static_cast<double>(step + 1) * plan.shots);
        }
    }
    // Longer windows: k + 1 frames of energy in k frame periods, which no window of that length exceeds.
    const auto consider_frames = [&](double window) {
        const double frames = std::floor(window / plan.frame_period * (1 + 1e-12)) + 1;
        consider(window, frames * frame_energy, frames * count * plan.shots);
    };
    for (double frames = 2; frames * plan.frame_period < rules.time_base; frames *= 2)
        consider_frames(frames * plan.frame_period);
    for (const double window : {t2(alpha_min), rules.time_base})
        if (window >= plan.frame_period) consider_frames(window);
    return worst;
}

ExposureCase worst_train(const FiringPlan& plan, std::span<const DwellEnergy> dwells,
                         const ExposureRules& rules, const ExposureCase& single, const ExposureCase& group) {
    const double ti = grouping_time(rules.wavelength);
    const bool grouped = group.pulses > 1;
    const double span = (plan.shots - 1) * plan.shot_period;
    const double groups_a_dwell =
        grouped ? std::min<double>(plan.shots, std::floor(span / ti) + 1) : plan.shots;
    const double window = std::min(t2(alpha_min), rules.time_base);
    const double frames = std::max(1.0, std::ceil(window / plan.frame_period * (1 - 1e-12)));
    const double n = std::max(1.0, frames * groups_a_dwell * static_cast<double>(dwells.size()));
    const double factor = c5({.wavelength = rules.wavelength,
                              .duration = plan.pulse_width,
                              .count = n,
                              .time_base = rules.time_base});
    const ExposureCase& each = grouped && group.ratio() > single.ratio() ? group : single;
    return {.criterion = PulseCriterion::train,
            .duration = each.duration,
            .pulses = n,
            .C5 = factor,
            .ae = each.ae,
            .ael = factor * each.ael};
}

}  // namespace

std::vector<DwellEnergy> dwell_energies(const FiringPlan& plan, std::span<const ZoneEnergy> zones) {
    std::vector<double> of_zone(plan.zones.size(), 0.0);
    for (const ZoneEnergy& zone : zones) of_zone[zone.zone] += zone.energy;
    std::vector<DwellEnergy> dwells;
    for (int dwell = 0; dwell < plan.dwells(); ++dwell) {
        double energy = 0;
        for (const int zone : plan.zones_of(dwell)) energy += of_zone[zone];
        if (energy > 0) dwells.push_back({dwell, energy});
    }
    return dwells;
}

std::vector<ExposureCase> judge(const FiringPlan& plan, std::span<const DwellEnergy> dwells,
                                const ExposureRules& rules) {
    if (dwells.empty()) return {};
    std::vector<ExposureCase> cases{worst_single(plan, dwells, rules)};
    const ExposureCase average = worst_average(plan, dwells, rules);
    if (average.ael > 0) cases.push_back(average);
    const ExposureCase group = worst_group(plan, dwells, rules);
    if (group.pulses > 1) cases.push_back(group);
    const bool retinal =
        touches(retinal_wavelengths, rules.wavelength) && rules.wavelength < retinal_wavelengths.to;
    if (retinal && plan.pulse_width <= 0.25)
        cases.push_back(worst_train(plan, dwells, rules, cases.front(), group));
    return cases;
}

}  // namespace glint
