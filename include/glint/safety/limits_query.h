// One question to the limit tables and everything that belongs to its answer.
#pragma once

#include <glint/safety/limits.h>
#include <glint/safety/pulses.h>
#include <optional>
#include <string>
#include <vector>

namespace glint {

/// What `glintplan limits` asks.
struct LimitsQuery {
    double wavelength = 0;             ///< m, 400 nm to 1800 nm
    double duration = 0;               ///< s, of the emission or of one pulse
    double subtense = alpha_min;       ///< rad
    std::optional<double> repetition;  ///< Hz, for a regular train
    std::optional<double> pulses;      ///< whole number, when the train ends; needs `repetition`
};

/// Factors, limits and, for a train, the pulse criteria for Class 1 with a time base of 100 s.
struct LimitsAnswer {
    LimitsQuery query;
    std::optional<double> C4, C6, C7;  ///< none above 1400 nm
    std::optional<double> T2;          ///< s
    std::optional<double> alpha_max;   ///< rad
    Limit class_1;
    std::optional<Limit> class_2;  ///< 400-700 nm only
    Limit class_3R;
    Limit class_3B;
    std::optional<TrainLimits> train;
    std::vector<std::string> notes;  ///< what to mind about this answer, whole sentences
};

/// Looks everything up. Throws Error for values out of range, a number of pulses without a repetition, and
/// pulses that overlap (repetition * duration above 1).
[[nodiscard]] LimitsAnswer look_up_limits(const LimitsQuery& query);

}  // namespace glint
