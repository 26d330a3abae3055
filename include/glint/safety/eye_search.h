// The eye search: the place and focus of the eye, and the part of its image, with the largest ratio to the
// limit.
#pragma once

#include <glint/core/parallel.h>
#include <glint/safety/aperture.h>
#include <glint/safety/window_search.h>

#include <array>
#include <span>
#include <vector>

namespace glint {

/// The worst that one criterion finds. Limits without an angle count all that enters: the part is then empty.
struct EyeCase {
    Condition condition = Condition::naked_eye;
    Mechanism mechanism = Mechanism::retinal_thermal;
    ImagePart part;
    EyePlace eye;
    double vergence = 0;  ///< 1/focus distance [1/m]; 0: at infinity
};

/// Worst case of each criterion, indexed by PulseCriterion; ratio 0 where nothing was found.
using EyeCases = std::array<EyeCase, 4>;

/// Counters of a search.
struct SearchWork {
    std::size_t places = 0;    ///< of the eye
    std::size_t images = 0;    ///< place and focus searched for windows
    std::size_t skipped = 0;   ///< place and focus dropped by their bound
    std::size_t families = 0;  ///< of windows bounded
};

/// Share by which what a search drops may exceed what it found.
inline constexpr double search_slack = 0.01;
/// The same for arrays of more than 1024 beams that all go the same way: their images hold every beam, and
/// searching them as closely would take minutes.
inline constexpr double search_slack_of_many = 0.1;
/// Factor on a ratio found: the slack of the search, and half a percent for places between those of the
/// raster and for edges of spots taken as one.
[[nodiscard]] constexpr double allowance_for(double slack) { return 1 + slack + 0.005; }
/// How closely the worst is found.
enum class Accuracy {
    fine,    ///< to search_slack
    coarse,  ///< to search_slack_of_many, several times faster
};

/// Slack of a search of a field.
[[nodiscard]] double slack_for(const FarField& field, Accuracy accuracy = Accuracy::fine);
/// The usual factor.
inline constexpr double search_allowance = allowance_for(search_slack);

/// What has been found so far, by one search or by several that build on each other.
struct EyeSearch {
    EyeCases worst;
    Ratios known{};  ///< ratios that need not be found again; as found, without the allowance
    double slack = search_slack;
    SearchWork work;

    /// Largest ratio of all criteria, without the allowance.
    [[nodiscard]] double worst_ratio() const;
    /// Largest ratio that any place, focus and part can give.
    [[nodiscard]] double bound() const { return worst_ratio() * allowance_for(slack); }
};

/// Where and against what to look.
struct EyeQuestion {
    const TimePattern& pattern;
    const FarField& field;  ///< not merged
    Condition condition = Condition::naked_eye;
    double closest_access = 0;  ///< of the eye to the chip [m]
    double enough = 1e300;      ///< ratio, the allowance not included, beyond which the search may stop
    Accuracy accuracy = Accuracy::fine;
};

/// Searches all places in front of the module from the closest the condition and the access allow (100 mm or
/// 2 m from the chip) outward, each with every vergence of vergences(), for cases worse than known `before`.
/// Places form a raster in direction, half a pupil radius apart or a fifth of the beams' radius there,
/// whichever is more, and at most 0.06 rad; distances grow by 1.2 until all that enters, taken as a point, is
/// below what was found. Around the worst it looks in ever smaller steps of place, distance and focus. The
/// result is the same for any number of threads.
[[nodiscard]] EyeSearch search_eyes(const EyeQuestion& question, EyeSearch before,
                                    const Progress& progress = {});

/// The same for given places of the eye, module frame [m].
[[nodiscard]] EyeSearch search_eyes_at(const EyeQuestion& question, std::span<const Vec3> places,
                                       EyeSearch before, const Progress& progress = {});

}  // namespace glint
