// The small-source evaluation: the worst place of the eye found by branch and bound.
#include <glint/core/constants.h>
#include <glint/safety/small_source.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <optional>
#include <queue>

namespace glint {
namespace {

constexpr double tolerance = 0.03;

struct Setup {
    const FiringPlan& plan;
    const FarField& field;
    double wavelength;
    double closest_access;
    const Progress& progress;
};

// A square of eye positions, in (y, z) of the unit direction, with a bound on every ratio in it.
struct Square {
    Vec2 middle;
    double half;
    double bound;
    bool operator<(const Square& other) const { return bound < other.bound; }
};

struct Worst {
    std::vector<ExposureCase> cases;  // worst of each criterion, the largest of them a true bound
    std::size_t tested = 0;
    [[nodiscard]] double ratio() const {
        double largest = 0;
        for (const ExposureCase& each : cases) largest = std::max(largest, each.ratio());
        return largest;
    }
};

// Apertures change with the duration beyond 1400 nm: the small one for pulses, the large one from 0.35 s on.
// The sizes in between are judged with the large one, which is the stricter reading.
std::vector<double> durations_of_apertures(double wavelength) {
    if (wavelength < retinal_wavelengths.to * (1 - 1e-9)) return {1e-9};
    return {1e-9, 10};
}

class Search {
public:
    Search(const Setup& setup, Condition condition, const ExposureRules& rules)
        : setup_(setup), condition_(condition), rules_(rules) {}

    Worst run() {
        const auto [low, high] = lit_square();
        const MeasurementCondition at = measurement(condition_, setup_.wavelength, 10);
        const double distance = std::max(at.distance, setup_.closest_access);
        const double half = at.aperture / distance / 4;
        std::priority_queue<Square> open;
        for (double y = low.x() + half; y - half <= high.x(); y += 2 * half)
            for (double z = low.y() + half; z - half <= high.y(); z += 2 * half)
                push(open, {Vec2(y, z), half, 0});
        while (!open.empty() && open.top().bound > worst_.ratio() * (1 + tolerance)) {
            if (setup_.progress.stopping()) throw Stopped{};
            const Square square = open.top();
            open.pop();
            const double quarter = square.half / 2;
            for (const double dy : {-quarter, quarter})
                for (const double dz : {-quarter, quarter})
                    push(open, {square.middle + Vec2(dy, dz), quarter, 0});
        }
        // What is left open may exceed the best place found by up to the tolerance: report the bound, not the
        // place.
        const double bound = open.empty() ? worst_.ratio() : std::max(worst_.ratio(), open.top().bound);
        const double lift = worst_.ratio() > 0 ? bound / worst_.ratio() : 1;
        for (ExposureCase& each : worst_.cases) each.ae *= lift;
        return std::move(worst_);
    }

private:
    // Judges one place, or the worst around it; `play` as a share of the distance.
    std::vector<ExposureCase> judge_at(const Vec2& yz, double play) {
        ++worst_.tested;
        const double x2 = 1 - yz.squaredNorm();
        const Vec3 direction = Vec3(x2 > 0 ? std::sqrt(x2) : 0, yz.x(), yz.y()).normalized();
        std::vector<ExposureCase> cases;
        for (const double duration : durations_of_apertures(setup_.wavelength)) {
            const MeasurementCondition at = measurement(condition_, setup_.wavelength, duration);
            const double distance = std::max(at.distance, setup_.closest_access);
            const Aperture aperture{distance * direction, at.aperture / 2, play * distance};
            const auto zones = collected_energies(setup_.field, aperture, setup_.plan.pulse_width);
            const auto dwells = dwell_energies(setup_.plan, zones);
            for (ExposureCase& each : judge(setup_.plan, dwells, rules_)) {
                // With several apertures each judges the durations it belongs to.
                const bool belongs = setup_.wavelength < retinal_wavelengths.to * (1 - 1e-9) ||
                                     (each.duration <= 0.35) == (duration < 1);
                if (!belongs) continue;
                each.condition = condition_;
                each.eye = aperture.centre;
                for (const ZoneEnergy& zone : zones) each.zones.push_back(zone.zone);
                cases.push_back(std::move(each));
            }
        }
        return cases;
    }

    void push(std::priority_queue<Square>& open, Square square) {
        // The farthest place of the square is half a diagonal away in (y, z); on the sphere that is farther
        // by 1/x.
        const double outermost = std::min(1.0, square.middle.norm() + square.half * std::sqrt(2.0));
        const double slant = 1 / std::sqrt(std::max(1 - outermost * outermost, 0.01));
        const double radius = square.half * std::sqrt(2.0) * slant;
        for (const ExposureCase& each : judge_at(square.middle, radius))
            square.bound = std::max(square.bound, each.ratio());
        if (square.bound <= worst_.ratio() * (1 + tolerance)) return;
        for (ExposureCase& each : judge_at(square.middle, 0)) {
            const auto known = std::ranges::find(worst_.cases, each.criterion, &ExposureCase::criterion);
            if (known == worst_.cases.end())
                worst_.cases.push_back(std::move(each));
            else if (each.ratio() > known->ratio())
                *known = std::move(each);
        }
        open.push(square);
    }

    // Square in (y, z) that holds every direction with light.
    [[nodiscard]] std::pair<Vec2, Vec2> lit_square() const {
        Vec2 low(1, 1), high(-1, -1);
        for (const Beam& beam : setup_.field.beams) {
            const double reach = std::atan(beam.kernel.reach) + 0.05;  // beams start beside the origin
            const Vec2 middle(beam.axis.y(), beam.axis.z());
            low = low.cwiseMin(middle - Vec2::Constant(reach)),
            high = high.cwiseMax(middle + Vec2::Constant(reach));
        }
        return {low.cwiseMax(-0.995), high.cwiseMin(0.995)};
    }

    const Setup& setup_;
    Condition condition_;
    ExposureRules rules_;
    Worst worst_;
};

}  // namespace

SafetyVerdict judge_small_source(const Design& design, const FiringPlan& plan, const FarField& field,
                                 const Progress& progress) {
    const Setup setup{plan, field, design.emitters.wavelength, design.eye_safety.closest_access, progress};
    const bool visible = setup.wavelength >= 400e-9 && setup.wavelength < 700e-9;
    SafetyVerdict verdict;
    const auto ratios = [&](LaserClass laser_class) {
        const bool brief =
            visible && laser_class != LaserClass::class_1 && laser_class != LaserClass::class_3B;
        const ExposureRules rules{laser_class, setup.wavelength,
                                  brief ? aversion_time_base : design.eye_safety.time_base};
        ConditionRatios result;
        for (const Condition condition : {Condition::telescope, Condition::naked_eye}) {
            Worst worst = Search(setup, condition, rules).run();
            (condition == Condition::telescope ? result.condition_1 : result.condition_3) = worst.ratio();
            verdict.places_tested += worst.tested;
            if (laser_class == LaserClass::class_1)
                verdict.criteria.insert(verdict.criteria.end(), worst.cases.begin(), worst.cases.end());
        }
        return result;
    };
    ClassRatios all{.class_1 = ratios(LaserClass::class_1), .class_2 = {}, .class_3R = {}, .class_3B = {}};
    verdict.worst_ratio = std::max(all.class_1.condition_1, all.class_1.condition_3);
    verdict.margin = 1 - verdict.worst_ratio;
    std::ranges::stable_sort(verdict.criteria, std::greater{},
                             [](const ExposureCase& each) { return each.ratio(); });
    if (verdict.worst_ratio > 1) {  // the other classes matter only beyond Class 1
        if (visible) all.class_2 = ratios(LaserClass::class_2);
        all.class_3R = ratios(LaserClass::class_3R);
        all.class_3B = ratios(LaserClass::class_3B);
    }
    verdict.laser_class = indicated_class(all);
    return verdict;
}

}  // namespace glint
