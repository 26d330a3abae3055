// An evaluator of eye safety that shares nothing with the search but beams and firing plan: every part, start
// and duration one by one.
//
// Written from docs/safety.md ("How a design is judged") and the printed tables. Class 1, retinal thermal
// limit only.
#pragma once

#include "brute_image.h"

#include <glint/emitter/firing.h>
#include <glint/safety/pulses.h>

#include <string>
#include <vector>

namespace glint::test {

/// Every pulse of a frame, and what follows from the plan alone.
struct BrutePlan {
    struct Pulse {
        double start;  ///< [s]
        int dwell;
    };
    std::vector<Pulse> pulses;  ///< of one frame, in time order
    std::vector<std::vector<int>> dwells_of_zone;
    std::vector<int> shots_of_dwell;
    std::vector<int> groups_of_dwell;  ///< pulses, or groups within Ti where these hold several
    double pulse_width = 0, frame = 0, wavelength = 0, time_base = 0;  ///< [s], [m]
    double most_in_group = 1,
           most_of_one_in_group = 1;  ///< pulses that start within Ti: of all dwells, of one

    /// A stretch from the start of a pulse to the end of another: the most pulses in any as short, of all
    /// dwells and of one dwell, and the largest such number over the limit of a point in any as long [1/J].
    /// With the energy of the strongest pulse they bound what a part can reach, so that hopeless parts need
    /// not be tried.
    struct Stretch {
        double duration;  ///< [s]
        double all_dwells = 0, one_dwell = 0;
        double all_over_limit = 0, one_over_limit = 0;
    };
    std::vector<Stretch> stretches;  ///< up to a frame, shortest first
    std::vector<double> lengths;     ///< sides to try beside those of the spots, shortest first [rad]
};

[[nodiscard]] BrutePlan brute_plan(const FiringPlan& plan, double wavelength, double time_base);

/// The worst part, criterion and duration.
struct BruteWorst {
    double ratio = 0;  ///< AE/AEL
    PulseCriterion criterion = PulseCriterion::single;
    double duration = 0;  ///< [s]
    double N = 1, C5 = 1;
    Vec2 low = Vec2::Zero(), high = Vec2::Zero();  ///< of the part [rad]
    double subtense = 0;                           ///< [rad]
    long parts = 0;                                ///< of the image
    long tried = 0;                                ///< of them, without those that cannot be the worst
};

/// Largest AE/AEL over every rectangular part of the image, start, duration and criterion.
[[nodiscard]] BruteWorst brute_force(const BrutePlan& plan, const std::vector<BruteSpot>& image);

/// The same for one part of it [rad].
[[nodiscard]] BruteWorst brute_force_part(const BrutePlan& plan, const std::vector<BruteSpot>& image,
                                          const Vec2& low, const Vec2& high);

/// The same for an eye.
[[nodiscard]] double brute_force_ratio(const Beams& beams, const FiringPlan& plan, const BruteEye& eye,
                                       double wavelength, double time_base);

/// "ratio 1.2, train, 5 ns, N 1234, C5 0.4, part ...".
[[nodiscard]] std::string describe(const BruteWorst& worst);

}  // namespace glint::test
