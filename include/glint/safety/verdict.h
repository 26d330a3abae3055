// The verdict on eye safety: class, margin, what governs, what would still hold, how far away it is safe, and
// faults.
#pragma once

#include <glint/safety/exposure.h>

#include <optional>
#include <string>
#include <vector>

namespace glint {

/// What one fault does.
struct FaultVerdict {
    std::string name;
    LaserClass laser_class = LaserClass::class_4;  ///< while the fault lasts
    double worst_ratio = 0;                        ///< largest AE/AEL of the class that must hold
    /// Longest time from the fault to darkness for which that class holds [s]; the time base when it holds
    /// anyway; nothing when even one shot is too much.
    std::optional<double> reaction_time;
    bool holds = false;  ///< the class holds without any switch-off
    std::optional<ExposureCase> governing;
};

/// How the design stands against the limits.
struct SafetyVerdict {
    LaserClass laser_class = LaserClass::class_4;
    double worst_ratio = 0;              ///< largest AE/AEL of Class 1, both conditions
    double margin = 0;                   ///< 1 - worst_ratio; negative when the limit is exceeded
    std::vector<ExposureCase> criteria;  ///< Class 1: worst case of each criterion, the governing one first
    std::string corner;                  ///< of the tolerances, the worst
    std::size_t corners = 1;             ///< that were searched
    LaserClass asked = LaserClass::class_1;  ///< class that the requirement, or Class 1 without one, asks for
    double asked_margin = 0;                 ///< share of its limit that must stay unused
    double asked_ratio = 0;  ///< largest AE/AEL of that class under the conditions that it has to hold
    double largest_shot_energy = 0;  ///< [J] all emitters of one shot, at the chip, at which that still holds
    double largest_average_power = 0;  ///< [W] of the chip over a frame
    double hazard_distance = 0;  ///< [m] from the chip, naked eye; 0 when no place allowed exceeds Class 1
    double aided_hazard_distance = 0;  ///< [m] with a telescope
    std::vector<FaultVerdict>
        faults;           ///< one for each fault of the design, in its order, once they are judged
    Design worst_design;  ///< with its tolerances used up
    SearchWork work;
    EyeSearch found;    ///< Class 1, as found, for pictures
    LightSource light;  ///< of the worst corner
};

/// Judges a design: every corner of its tolerances against Class 1, the worst of them against the other
/// classes. Errors: those of project() and plan_firing().
[[nodiscard]] SafetyVerdict judge_safety(const Design& design, const EmitterArray& array,
                                         const Progress& progress = {});

/// Judges every fault of the design and adds it to the verdict.
void judge_faults(SafetyVerdict& verdict, const EmitterArray& array, const Progress& progress = {});

}  // namespace glint
