// The eye search held against the independent evaluator on random small designs.
#include "about.h"
#include "brute_force.h"
#include "brute_limits.h"
#include "random_designs.h"

#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/safety/eye_search.h>
#include <glint/safety/limits.h>

#include <doctest/doctest.h>
#include <fmt/format.h>
#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <string>
#include <vector>

using namespace glint;
using namespace glint::test;

namespace {

// Quadrature of the evaluator; edges of spots that it takes as one; the search has its own allowance on top.
constexpr double quadrature = 1e-3;
// What was found times the allowance of the search, 1.5 %, must not be more than 2 % above the true value there.
constexpr double tightness = 1.02;
constexpr int random_eyes = 4;

struct Outcome {
    bool built = false;
    double sound = 0;  // largest brute force over reported, of all eyes tried
    double tight = 0;  // reported over brute force at the worst eye
    std::string report;  // what is needed to look at it again
};

// A place near the beams: somewhere towards one of them, a little aside.
BruteEye random_eye(RandomStream& random, const Beams& beams) {
    const bool telescope = random.uniform() < 0.3;
    const double nearest = telescope ? 2 : 0.1;
    const Beam& beam = beams.beams[random.below(beams.beams.size())];
    const double distance = random.uniform() < 0.5 ? nearest : nearest * (1 + std::pow(random.uniform(), 3) * 20);
    const double width = std::min(1.0, random.uniform() < 0.5 ? 0.02 : std::max(beam.kernel.a, beam.kernel.b));
    const auto aside = [&] { return (random.uniform() - 0.5) * 2 * width; };
    Vec3 direction = beam.axis + aside() * Vec3::UnitY() + aside() * Vec3::UnitZ();
    if (random.uniform() < 0.3) direction += beam.origin / distance;
    BruteEye eye{.pupil_radius = telescope ? 25e-3 : 3.5e-3};
    eye.place = distance * (1 + 1e-9) * direction.normalized();
    if (eye.place.x() < 0.3 * distance) eye.place = distance * (1 + 1e-9) * Vec3::UnitX();
    const double focus = random.uniform();
    eye.vergence = focus < 0.25   ? 0
                   : focus < 0.5 ? std::min(10.0, 1 / (eye.place - beam.origin).norm())
                                 : 10 * random.uniform();
    return eye;
}

std::string describe_eye(const BruteEye& eye) {
    return fmt::format("eye {:.9g} {:.9g} {:.9g} m, pupil {} mm, vergence {:.9g}", eye.place.x(), eye.place.y(), eye.place.z(),
                       eye.pupil_radius * 1e3, eye.vergence);
}

std::string describe_case(const EyeCase& found) {
    const TimedRatio& w = found.part.worst;
    return fmt::format("ratio {:.6g}, {:.6g} s, pulses {}, C5 {:.4g}, {:.6g} mrad, part {:.6g} to {:.6g} by {:.6g} to {:.6g} mrad",
                       w.ratio, w.duration, w.pulses, w.C5, found.part.subtense * 1e3, found.part.low.x() * 1e3,
                       found.part.high.x() * 1e3, found.part.low.y() * 1e3, found.part.high.y() * 1e3);
}

Outcome try_design(std::uint64_t seed) {
    Outcome outcome;
    try {
        const Design design = random_design(seed);
        const EmitterArray array = build_array(design.emitters, field_sense(design.optics), ".");
        const FiringPlan plan = plan_firing(design, array);
        const Beams beams = project(array, design);
        const FarField field = far_field(beams, Merge::no);
        const double wavelength = design.emitters.wavelength, time_base = design.eye_safety.time_base;
        const TimePattern pattern = time_pattern(plan, ExposureRules{LaserClass::class_1, wavelength, time_base});
        EyeSearch search;
        for (const Condition condition : {Condition::telescope, Condition::naked_eye})
            search = search_eyes({pattern, field, condition, 0.0}, search);
        outcome.built = true;
        const double reported = search.worst_ratio() * search_allowance;
        const BrutePlan pulses = brute_plan(plan, wavelength, time_base);

        const auto worst = std::ranges::max_element(search.worst, {}, [](const EyeCase& c) { return c.part.worst.ratio; });
        const BruteEye found{worst->eye.place, worst->eye.pupil_radius, worst->vergence};
        const BruteWorst there = brute_force(pulses, brute_image(beams, found, plan.pulse_width));
        outcome.tight = reported / there.ratio;
        outcome.sound = there.ratio / reported;
        outcome.report = fmt::format("seed {}\n  search: {} {}\n  {}\n  brute: {}", seed, describe_eye(found),
                                     name_of(static_cast<PulseCriterion>(worst - search.worst.begin())), describe_case(*worst), describe(there));
        RandomStream random(seed + 1'000'000);
        for (int i = 0; i < random_eyes; ++i) {
            const BruteEye eye = random_eye(random, beams);
            const BruteWorst other = brute_force(pulses, brute_image(beams, eye, plan.pulse_width));
            if (other.ratio <= reported * outcome.sound) continue;
            outcome.sound = other.ratio / reported;
            outcome.report += fmt::format("\n  at {}\n  brute: {}", describe_eye(eye), describe(other));
        }
    } catch (const Error& error) {
        outcome.report = fmt::format("seed {}: {}", seed, error.what());
    }
    return outcome;
}

}  // namespace

TEST_CASE("the evaluator's own limits are those of the tables") {
    RandomStream random(5);
    for (int i = 0; i < 20'000; ++i) {
        const double wavelength = 400e-9 + 949e-9 * random.uniform();
        const double duration = 1e-10 * std::pow(1e14, random.uniform());
        const double subtense = std::min(brute_alpha_max(duration), 1e-3 * std::pow(100.0, random.uniform()));
        const auto limit = class_limit(LaserClass::class_1, {wavelength, duration, subtense}, Mechanism::retinal_thermal);
        REQUIRE(limit);
        CHECK(brute_limit(brute_cells(wavelength), duration, subtense) == about(limit->energy).epsilon(1e-9));
    }
}

TEST_CASE("the search is sound and tight against brute force on random small designs") {
    const char* first = std::getenv("BRUTE_FIRST");
    const char* number = std::getenv("BRUTE_COUNT");
    const int from = first ? std::atoi(first) : 1, count = number ? std::atoi(number) : 2400;
    std::vector<Outcome> outcomes(static_cast<std::size_t>(count));
#pragma omp parallel for schedule(dynamic, 1)
    for (int i = 0; i < count; ++i) outcomes[i] = try_design(static_cast<std::uint64_t>(from + i));
    int built = 0;
    const Outcome *least_sound = &outcomes.front(), *least_tight = &outcomes.front();
    for (const Outcome& outcome : outcomes) {
        if (!outcome.built) { MESSAGE(outcome.report); continue; }
        ++built;
        if (outcome.sound > 1 + quadrature) FAIL_CHECK("not sound by ", outcome.sound, ", ", outcome.report);
        if (!(outcome.tight <= tightness)) FAIL_CHECK("not tight by ", outcome.tight, ", ", outcome.report);
        if (outcome.sound > least_sound->sound) least_sound = &outcome;
        if (outcome.tight > least_tight->tight) least_tight = &outcome;
    }
    MESSAGE(built, " designs of ", count, "; brute force over reported at most ", least_sound->sound,
            "; reported over brute force at most ", least_tight->tight);
}
