// The three pulse criteria for trains.
#include <glint/safety/limits.h>
#include <glint/safety/pulses.h>
#include "refuse.h"

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <cmath>

namespace glint {
namespace {

constexpr double longest_train_pulse = 0.25;  // s, criterion 3 looks at no longer pulse
constexpr int whole_pulse_windows = 64;

// Rounded up; what lies above a whole number by rounding only counts as that number.
double whole_number_above(double quotient) { return std::ceil(quotient * (1 - 1e-9)); }

void check(const RegularTrain& train) {
    check_wavelength(train.wavelength);
    check_duration(train.duration);
    check_subtense(train.subtense);
    check_duration(train.time_base);
    check_positive(train.repetition, "repetition");
    if (train.repetition * train.duration > 1 + 1e-9)
        refuse(fmt::format("pulses overlap: {:g} Hz times {:g} s is {:.3g}", train.repetition, train.duration,
                           train.repetition * train.duration),
               "repetition times duration of at most 1");
    if (train.pulses &&
        !(*train.pulses >= 1 && std::floor(*train.pulses) == *train.pulses && std::isfinite(*train.pulses)))
        refuse(fmt::format("number of pulses is {:g}", *train.pulses), "a whole number, 1 or greater");
}

bool retinal(double wavelength) { return touches(retinal_wavelengths, wavelength); }

// Time from the first pulse's start to the end of pulse number `pulses`.
double length_of(const RegularTrain& train, double pulses) {
    return (pulses - 1) / train.repetition + train.duration;
}

// min(T2, time base); no eye movement helps the cornea, so from 1400 nm on it is the time base.
double counting_window(const RegularTrain& train) {
    return retinal(train.wavelength) ? std::min(t2(train.subtense), train.time_base) : train.time_base;
}

struct AverageLimit {
    double energy = 0;  // J per pulse
    double window = 0;  // s
};

AverageLimit average_limit(const RegularTrain& train, LaserClass laser_class) {
    const auto per_pulse = [&](double window, double pulses) {
        const EmissionWindow emission{train.wavelength, window, train.subtense};
        return AverageLimit{class_limit(laser_class, emission).energy / std::max(1.0, pulses), window};
    };
    // A window longer than a finite train would only dilute it; one shorter than a pulse would cut it.
    const auto stretch = [&](double window) {
        const double T = std::max(window, train.duration);
        if (train.pulses && length_of(train, *train.pulses) <= T)
            return per_pulse(length_of(train, *train.pulses), *train.pulses);
        return per_pulse(T, train.repetition * T);
    };
    AverageLimit least = stretch(counting_window(train));
    const auto keep = [&](const AverageLimit& other) {
        if (other.energy < least.energy * (1 - 1e-9)) least = other;
    };
    // From T2 on the thermal limit grows with time as the train does; the photochemical one may still bite.
    keep(stretch(train.time_base));
    // repetition * window rounds the number of pulses down by up to one, which tells when they are few.
    for (int pulses = 2; pulses <= whole_pulse_windows; ++pulses) {
        const double window = length_of(train, pulses);
        if (window > train.time_base || (train.pulses && pulses > *train.pulses)) break;
        keep(per_pulse(window, pulses));
    }
    return least;
}

}  // namespace

double c5(const TrainPulse& pulse) {
    check_retinal_wavelength(pulse.wavelength);
    check_duration(pulse.duration);
    check_subtense(pulse.subtense);
    check_duration(pulse.time_base);
    if (!std::isfinite(pulse.count) || pulse.count < 1)
        refuse(fmt::format("number of pulses N is {:g}", pulse.count), "a finite number, 1 or greater");

    const double root = std::pow(pulse.count, -0.25);
    if (pulse.duration <= grouping_time(pulse.wavelength)) {
        if (pulse.time_base <= aversion_time_base || pulse.count <= 600) return 1;
        // 5 N^-0.25 is 1.01 just above 600 pulses: a train is never allowed more than its single pulse.
        return std::clamp(5 * root, 0.4, 1.0);
    }
    const double mrad = pulse.subtense * 1e3;
    if (mrad <= 5 || mrad > 100) return 1;
    if (pulse.subtense <= alpha_max(pulse.duration)) return pulse.count <= 40 ? root : 0.4;
    return pulse.count <= 625 ? root : 0.2;
}

PulseCount pulses_counted(const RegularTrain& train) {
    check(train);
    const double Ti = grouping_time(train.wavelength);
    PulseCount count;
    count.window = std::max(counting_window(train), train.duration);
    count.pulses = train.repetition * count.window;
    if (train.pulses) {
        count.window = std::min(count.window, length_of(train, *train.pulses));
        count.pulses = std::min(count.pulses, *train.pulses);
    }
    count.pulses = std::max(1.0, count.pulses);
    count.pulses_in_group = std::max(1.0, whole_number_above(Ti * train.repetition));
    if (train.pulses) count.pulses_in_group = std::min(count.pulses_in_group, *train.pulses);
    const bool grouped = count.pulses_in_group > 1;
    count.N = grouped ? std::clamp(count.window / Ti, 1.0, count.pulses) : count.pulses;
    return count;
}

std::string_view name_of(PulseCriterion criterion) {
    constexpr std::array<std::string_view, 4> names{"single", "average", "group", "train"};
    return names[static_cast<std::size_t>(criterion)];
}

TrainLimits train_limits(const RegularTrain& train, LaserClass laser_class) {
    const PulseCount count = pulses_counted(train);
    const AverageLimit average = average_limit(train, laser_class);
    TrainLimits limits;
    limits.N = count.N;
    limits.average = average.energy;
    limits.average_window = average.window;
    limits.single = class_limit(laser_class, {train.wavelength, train.duration, train.subtense}).energy;
    if (count.pulses_in_group > 1) {
        const double Ti = grouping_time(train.wavelength);
        limits.group =
            class_limit(laser_class, {train.wavelength, Ti, train.subtense}).energy / count.pulses_in_group;
    }
    if (retinal(train.wavelength)) {
        limits.T2 = t2(train.subtense);
        if (train.duration <= longest_train_pulse) {
            limits.C5 = c5({train.wavelength, train.duration, train.subtense, count.N, train.time_base});
            limits.train = *limits.C5 * std::min(limits.single, limits.group.value_or(limits.single));
        }
    }

    limits.energy = limits.single;
    const auto keep = [&](PulseCriterion criterion, std::optional<double> energy) {
        // Equal but for rounding is a tie.
        if (energy && *energy < limits.energy * (1 - 1e-9)) {
            limits.governs = criterion;
            limits.energy = *energy;
        }
    };
    keep(PulseCriterion::average, limits.average);
    keep(PulseCriterion::group, limits.group);
    keep(PulseCriterion::train, limits.train);
    return limits;
}

}  // namespace glint
