// Pulse trains: the three criteria (single pulse, average, train) and the grouping of close pulses.
#pragma once

#include <glint/safety/class.h>
#include <glint/safety/factors.h>
#include <optional>
#include <string_view>

namespace glint {

/// What C5 depends on.
struct TrainPulse {
    double wavelength = 0;               ///< m, 400 nm to 1400 nm
    double duration = 0;                 ///< s, of one pulse; for a group within Ti that of a pulse, not Ti
    double subtense = alpha_min;         ///< rad, of the part under test, not capped at alpha_max
    double count = 1;                    ///< N, at least 1, see pulses_counted
    double time_base = usual_time_base;  ///< s
};

inline constexpr double smallest_c5 = 0.2;

/// C5, the reduction for pulse trains, in [0.2, 1].
/// t <= Ti: 1 when the time base is at most 0.25 s or N <= 600; else 5 N^-0.25, at least 0.4, at most 1.
/// t > Ti: 1 (alpha <= 5 mrad or > 100 mrad); N^-0.25 for N <= 40, else 0.4 (5 mrad < alpha <= alpha_max(t));
/// N^-0.25 for N <= 625, else 0.2 (alpha_max(t) < alpha <= 100 mrad). For a part of a larger source call it
/// with the subtense of the part and of the whole and keep the smaller: C5 does not fall steadily with alpha.
/// Throws Error for arguments out of range. Source: IEC 60825-1:2014, 4.3 f) 3; t <= Ti from memory, t > Ti
/// one secondary source.
[[nodiscard]] double c5(const TrainPulse& pulse);

/// A train of equal pulses at equal spacing.
struct RegularTrain {
    double wavelength = 0;               ///< m, 400 nm to 1800 nm
    double duration = 0;                 ///< s, of one pulse
    double repetition = 0;               ///< Hz; repetition * duration at most 1
    double subtense = alpha_min;         ///< rad
    double time_base = usual_time_base;  ///< s
    std::optional<double> pulses;        ///< whole number, at least 1; none for a train without end
};

/// How a regular train counts.
struct PulseCount {
    double window = 0;           ///< s, counted over: min(T2, time base), or the train if shorter
    double pulses = 1;           ///< pulses in the window, at least 1
    double pulses_in_group = 1;  ///< largest number of pulse starts within Ti, whole
    double N = 1;                ///< pulses, or groups where a group holds more than one; at least 1
};

/// Counts the pulses of a regular train within min(T2, time base); the time base alone from 1400 nm on.
/// Pulses that fall within one Ti are one, so N does not grow beyond window/Ti. N is repetition * window, not
/// rounded. Throws Error for arguments out of range or pulses that overlap. Source: IEC 60825-1:2014, 4.3 f),
/// from memory.
[[nodiscard]] PulseCount pulses_counted(const RegularTrain& train);

/// Which criterion is the strictest.
enum class PulseCriterion { single, average, group, train };

/// "single", "average", "group", "train".
[[nodiscard]] std::string_view name_of(PulseCriterion);

/// Limits of a regular train, each as energy per pulse [J] through the aperture and angle of acceptance that
/// belong to its duration (pulse, Ti, averaging window).
struct TrainLimits {
    double single = 0;            ///< AEL(t)
    double average = 0;           ///< smallest AEL(T)/(pulses in T) over windows T
    double average_window = 0;    ///< s, the T of `average`
    std::optional<double> group;  ///< AEL(Ti)/(pulses in Ti), when Ti holds more than one pulse
    std::optional<double> train;  ///< C5 times min(single, group), 400-1400 nm and t <= 0.25 s only
    double N = 1;
    std::optional<double> C5;
    std::optional<double> T2;  ///< s, 400-1400 nm only
    PulseCriterion governs = PulseCriterion::single;
    double energy = 0;  ///< J, the smallest of the four
};

/// The three criteria for a regular train. The average is tried over min(T2, time base), over the time base,
/// and over every window that holds 2 to 64 whole pulses; from 1400 nm to 1500 nm a window of 0.35 s may
/// allow 3.3 % less (the printed cells meet there below the constant power that follows) and is left to the
/// caller, for its aperture is 1 mm, not 3.5 mm. On a tie the earlier criterion governs. Throws Error for
/// arguments out of range, pulses that overlap, or a class without a limit. Source: IEC 60825-1:2014, 4.3 f);
/// structure two secondary sources, details from memory.
[[nodiscard]] TrainLimits train_limits(const RegularTrain& train,
                                       LaserClass laser_class = LaserClass::class_1);

}  // namespace glint
