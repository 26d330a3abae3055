// Exposure: the emission through one aperture over time, held against the pulse criteria.
#pragma once

#include <glint/emitter/firing.h>
#include <glint/safety/aperture.h>
#include <glint/safety/class.h>
#include <glint/safety/collection.h>
#include <glint/safety/pulses.h>
#include <glint/safety/time_pattern.h>
#include <span>
#include <vector>

namespace glint {

/// One emission held against its limit.
struct ExposureCase {
    PulseCriterion criterion = PulseCriterion::single;
    Condition condition = Condition::naked_eye;
    double duration = 0;  ///< of the emission [s]
    double pulses = 1;    ///< pulses in it; for the train criterion N
    double C5 = 1;
    double ae = 0;            ///< accessible emission [J]
    double ael = 0;           ///< its limit, C5 included [J]
    Vec3 eye = Vec3::Zero();  ///< middle of the aperture, module frame [m]
    std::vector<int> zones;   ///< that contribute

    [[nodiscard]] double ratio() const { return ae / ael; }
};

[[nodiscard]] std::vector<DwellEnergy> dwell_energies(const FiringPlan& plan,
                                                      std::span<const ZoneEnergy> zones);

/// Worst case of each criterion for a small source (C6 = 1), in the order single, average, group, train; a
/// criterion that does not apply is left out. Emission durations: one pulse; Ti; every span from the start of
/// one dwell to the end of another within a frame; whole frames up to 10 s (T2) and up to the time base. N
/// counts every group of pulses within Ti, C5 meets the largest group. Largest ratio first is left to the
/// caller.
[[nodiscard]] std::vector<ExposureCase> judge(const FiringPlan& plan, std::span<const DwellEnergy> dwells,
                                              const ExposureRules& rules);

}  // namespace glint
