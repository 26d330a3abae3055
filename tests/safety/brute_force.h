// An evaluator of eye safety that shares nothing with the search but beams and firing plan: every part, start and
// duration one by one.
//
// Written from docs/safety.md ("How a design is judged") and the printed tables. Class 1, retinal thermal limit only.
#pragma once

#include <glint/emitter/firing.h>
#include <glint/optics/beam.h>
#include <glint/safety/pulses.h>

#include <string>
#include <vector>

namespace glint::test {

/// An eye that looks at the module.
struct BruteEye {
    Vec3 place = Vec3::UnitX();    ///< middle of the pupil, module frame [m]
    double pupil_radius = 3.5e-3;  ///< [m]
    double vergence = 0;           ///< 1/focus distance [1/m]
};

/// Energy [J] of one beam through the pupil per pulse, summed over rings (narrow beams) or over a polar grid (wide
/// ones); better than 1e-3 where the kernel has no hard edge. Nothing where the pupil is beyond three 1/e2 radii.
[[nodiscard]] double brute_energy(const Beam& beam, const BruteEye& eye, double pulse_width);

/// The image of one beam: a rectangle of even energy [rad].
struct BruteSpot {
    Vec2 low, high;
    double energy = 0;  ///< per pulse [J]
    int zone = 0;
};

/// Second moments by matrices: transport to the pupil, the cut there as an update of the Gaussian, the eye's focus.
[[nodiscard]] std::vector<BruteSpot> brute_image(const Beams& beams, const BruteEye& eye, double pulse_width);

/// Class 1 limit [J], retinal thermal, from the tables; `subtense` at most alpha_max(duration).
[[nodiscard]] double brute_limit(double wavelength, double duration, double subtense);

/// C5 of the tables for N pulses of one width.
[[nodiscard]] double brute_C5(double wavelength, double pulse_width, double subtense, double N, double time_base);

/// Every pulse of a frame, and what the limits of its durations need.
struct BrutePlan {
    struct Pulse {
        double start;  ///< [s]
        int dwell;
    };
    std::vector<Pulse> pulses;                    ///< of one frame, in time order
    std::vector<std::vector<int>> dwells_of_zone;
    std::vector<int> groups_of_dwell;             ///< pulses, or groups within Ti where these hold several
    double pulse_width = 0, frame = 0, group_time = 0, wavelength = 0, time_base = 0;  ///< [s], [m]
    /// For every stretch, longest first: the largest number of pulses in it, of any dwells or of one, over the limit of
    /// a point for its duration or a longer one [1/J]. Energies of single pulses times these bound the average.
    struct Bound {
        double duration, any_dwells, one_dwell;
    };
    std::vector<Bound> bounds;
    std::vector<double> lengths;  ///< sides to try beside those of the spots: alpha_max of durations [rad]
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
    long windows = 0;                              ///< tried
};

/// Largest AE/AEL over every rectangular part of the image, start, duration and criterion.
[[nodiscard]] BruteWorst brute_force(const BrutePlan& plan, const std::vector<BruteSpot>& image);

/// The same for an eye.
[[nodiscard]] double brute_force_ratio(const Beams& beams, const FiringPlan& plan, const BruteEye& eye,
                                       double wavelength, double time_base);

/// "train, T 5 ns, N 1234, ..., part 1.5 x 3 mrad".
[[nodiscard]] std::string describe(const BruteWorst& worst);

}  // namespace glint::test
