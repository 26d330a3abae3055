// What stands behind a verdict on eye safety: the image that governs, its emission over time, the ratio over
// the field.
#pragma once

#include <glint/safety/verdict.h>

#include <optional>
#include <vector>

namespace glint {

/// The case with the largest ratio, with what it takes to look at it again.
struct GoverningCase {
    PulseCriterion criterion = PulseCriterion::single;
    EyeCase found;
    TimePattern pattern;  ///< of its mechanism and durations, Class 1
    double slack = 0;     ///< share of the search that found it
};

/// The governing case of a verdict for a time base [s]; nothing when no light reaches an eye.
[[nodiscard]] std::optional<GoverningCase> governing_case(const SafetyVerdict& verdict, double time_base);

/// The retinal image of a case on square cells, each zone firing once. Angles run to the module's right and
/// up from the line of sight [rad], as in ExposureCase.
struct GoverningImage {
    Vec2 low = Vec2::Zero(), high = Vec2::Zero();  ///< edges of what is shown
    std::size_t columns = 0, rows = 0;
    std::vector<double> density;  ///< [J/sr], mean over the cell; [rows x columns], the top row first
    double shown = 0;             ///< energy of the light inside the edges [J]
    double entering = 0;          ///< of all light that enters the pupil [J]
};

/// Image of the eye and focus of a case: every spot when they lie close, else three times the part, at least
/// 6 mrad and at most 110 mrad wide. Mechanisms without a part show every spot.
[[nodiscard]] GoverningImage governing_image(const LightSource& light, const GoverningCase& governing);

/// What the governing part emits and may emit, over the duration of the emission.
struct EmissionCurve {
    std::vector<double> durations;  ///< [s], from the pulse width to the time base, with the governing one
    std::vector<double> emission;   ///< most that starts within each, the search's allowance included [J]
    std::vector<double> limit;  ///< of the part, without C5 [J]; NaN where the part is longer than alpha_max
    double allowed_from = 0;    ///< duration from which alpha_max allows the part [s]
};

/// Curves of the governing part, or of all that enters for mechanisms without one.
[[nodiscard]] EmissionCurve emission_curve(const LightSource& light, const GoverningCase& governing);

/// The largest ratio of all criteria for places of the eye on a sphere around the chip, with the governing
/// distance, condition, mechanism and focus. Each cell has its place in its middle. Angles [rad] of the
/// direction from the chip, horizontal to the right and vertical upward.
struct SafetyMap {
    Vec2 low = Vec2::Zero(), high = Vec2::Zero();  ///< edges of the map
    std::size_t columns = 0, rows = 0;
    std::vector<double> ratios;     ///< AE/AEL with the allowance, [rows x columns], the top row first
    Vec2 governing = Vec2::Zero();  ///< of the governing place, the middle of a cell
    double distance = 0;            ///< [m]
};

/// Ratios over all directions that light goes to, 61 cells along the longer side, fewer (down to 13) for
/// images of more than 100 beams. A ratio may be 3 % (or the slack of the search) too low, and 0 where it is
/// below a hundredth of the governing one. The same for any number of threads.
[[nodiscard]] SafetyMap safety_map(const LightSource& light, const GoverningCase& governing);

}  // namespace glint
