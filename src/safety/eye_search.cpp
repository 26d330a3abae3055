// The eye search: places and foci in order of promise, and a closer look around the worst.
#include <glint/core/constants.h>
#include <glint/safety/eye_search.h>
#include <glint/safety/image_bound.h>

#include <algorithm>
#include <cmath>

namespace glint {
namespace {

constexpr double growth_of_distance = 1.2;
constexpr double farthest = 1e4;  // m
constexpr std::size_t single = static_cast<std::size_t>(PulseCriterion::single), group = static_cast<std::size_t>(PulseCriterion::group), train = static_cast<std::size_t>(PulseCriterion::train);
constexpr std::size_t batch = 64;

// A place of the eye and what enters there.
struct Place {
    EnteringLight light;
    TimedRatios as_point{};  // all of it taken as a point: no part of any image gives more
};

// A place and a focus, with a bound on what its image can give.
struct Item {
    std::size_t place;
    double vergence;
    Ratios bound;
    double promise;  // largest bound over what is known
};

// Smallest subtense for the limit, any subtense for N.
constexpr PartSize anything_as_point{.subtense = alpha_min, .largest_subtense = 0.2, .side = 0, .whole_subtense = 0.2};

double promise_of(const Ratios& bound, const Ratios& known) {
    double promise = 0;
    for (std::size_t c = 0; c < 4; ++c)
        if (bound[c] > 0) promise = std::max(promise, bound[c] / std::max(known[c], 1e-300));
    return promise;
}

Ratios ratios_of(const TimedRatios& timed) {
    Ratios ratios;
    for (std::size_t c = 0; c < 4; ++c) ratios[c] = timed[c].ratio;
    return ratios;
}

class Search {
public:
    Search(const EyeQuestion& question, EyeSearch before, const Progress& progress)
        : pattern_(question.pattern), question_(question), progress_(progress), found_(std::move(before)),
          dwell_of_zone_(static_cast<std::size_t>(question.field.zones), 0),
          retinal_(question.pattern.curve.mechanism == Mechanism::retinal_thermal) {
        for (int dwell = 0; dwell < pattern_.plan.dwells(); ++dwell)
            for (const int zone : pattern_.plan.zones_of(dwell)) dwell_of_zone_[zone] = dwell;
        const MeasurementCondition at =
            measurement(question.condition, pattern_.rules.wavelength, std::min(pattern_.rules.durations.to, 10.0));
        radius_ = at.aperture / 2;
        nearest_ = std::max(at.distance, question.closest_access);
        per_energy_ = ratios_of(worst_over_time(pattern_, std::array{DwellEnergy{.dwell = 0, .energy = 1}}, anything_as_point));
    }

    void everywhere() {
        if (nothing_at_all()) return;
        // A few places first: the more is known, the less has to be looked at.
        for (double distance = nearest_; distance < farthest; distance *= growth_of_distance)
            if (!look(few_places(distance)) || enough()) break;
        if (worst_is_ours()) closer();
        // Beyond some distance even all the light, taken as a point, is less than what was found nearer.
        for (double distance = nearest_; distance < farthest; distance *= growth_of_distance)
            if (enough() || !look(raster(distance))) break;
        if (worst_is_ours() && !enough()) closer();
    }

    void closer() {
        for (double step = 0.25; step > 0.01; step /= 2) look_around(step);
    }

    EyeSearch result() { return std::move(found_); }

    // False when nothing at these places can be worse than what is known.
    bool look(std::span<const Vec3> where) {
        std::vector<Place> places(where.size());
        parallel_for(where.size(), "looking for the worst place of the eye", progress_,
                     [&](std::size_t i) { places[i] = place_at(where[i]); });
        found_.work.places += where.size();
        bool any = false;
        for (const Place& place : places) {
            if (promise_of(ratios_of(place.as_point), found_.known) <= 1 + (retinal_ ? search_slack : 0)) continue;
            any = true;
            if (!retinal_) keep(whole(place), place.light.eye, 0);
        }
        if (any && retinal_) search_items(places, items_of(places));
        return any;
    }

private:
    // Whether all the light of the module through one pupil would not matter.
    [[nodiscard]] bool nothing_at_all() const {
        EnteringLight all;
        for (const Beam& beam : question_.field.beams) all.beams.push_back({.zone = beam.zone, .energy = beam.power * pattern_.plan.pulse_width});
        return all.beams.empty() || promise_of(ratios_of(as_point(all)), found_.known) <= 1;
    }

    [[nodiscard]] bool enough() const { return found_.worst_ratio() > question_.enough; }
    [[nodiscard]] const EyeCase& worst() const {
        return *std::ranges::max_element(found_.worst, {}, [](const EyeCase& each) { return each.part.worst.ratio; });
    }
    [[nodiscard]] bool worst_is_ours() const {
        return worst().part.worst.ratio > 0 && worst().condition == question_.condition && worst().mechanism == pattern_.curve.mechanism;
    }

    [[nodiscard]] TimedRatios as_point(const EnteringLight& light) const {
        std::vector<DwellEnergy> dwells;
        std::vector<std::pair<int, double>> entering;
        for (const EnteringBeam& beam : light.beams) entering.emplace_back(dwell_of_zone_[beam.zone], beam.energy);
        std::ranges::sort(entering);
        for (const auto& [dwell, energy] : entering) {
            if (dwells.empty() || dwells.back().dwell != dwell) dwells.push_back({dwell, 0});
            dwells.back().energy += energy;
        }
        return worst_over_time(pattern_, dwells, anything_as_point);
    }

    [[nodiscard]] Place place_at(const Vec3& where) const {
        Place place;
        place.light = entering_light(question_.field, {.place = where, .pupil_radius = radius_}, pattern_.plan.pulse_width);
        if (!place.light.beams.empty()) place.as_point = as_point(place.light);
        return place;
    }

    // Directions that any light goes to, as a square of (y, z) of the unit direction, and the raster's step there.
    [[nodiscard]] std::vector<Vec3> raster(double distance) const {
        Vec2 low(1, 1), high(-1, -1);
        double spot = 1e9;
        for (const Beam& beam : question_.field.beams) {
            const double aside = question_.field.spread + 3 * beam.exit_radius;
            const double reach = std::min(std::atan(beam.kernel.reach) + aside / distance, 1.5);
            const Vec2 middle(beam.axis.y(), beam.axis.z());
            low = low.cwiseMin(middle - Vec2::Constant(reach)), high = high.cwiseMax(middle + Vec2::Constant(reach));
            spot = std::min(spot, beam.kernel.shape == KernelShape::gaussian ? radius_at(beam, distance) : distance);
        }
        low = low.cwiseMax(-0.97), high = high.cwiseMin(0.97);
        const double step = std::min(std::max(radius_ / 2, 0.2 * spot) / distance, 0.06);
        // The middle of the field lies on the raster.
        const Vec2 middle = (low + high) / 2;
        const int across = static_cast<int>((high.x() - middle.x()) / step);
        const int up = static_cast<int>((high.y() - middle.y()) / step);
        std::vector<Vec3> places;
        for (int i = -across; i <= across; ++i)
            for (int k = -up; k <= up; ++k) {
                const Vec2 at = middle + step * Vec2(i, k);
                const double x2 = 1 - at.squaredNorm();
                if (x2 > 0.04) places.push_back(distance * Vec3(std::sqrt(x2), at.x(), at.y()));
            }
        return places;
    }

    // The middle, the corners and the edges of what the beams' axes cover.
    [[nodiscard]] std::vector<Vec3> few_places(double distance) const {
        Vec2 low(1, 1), high(-1, -1);
        for (const Beam& beam : question_.field.beams) {
            const Vec2 axis(beam.axis.y(), beam.axis.z());
            low = low.cwiseMin(axis), high = high.cwiseMax(axis);
        }
        std::vector<Vec3> places;
        for (const double y : {low.x(), (low.x() + high.x()) / 2, high.x()})
            for (const double z : {low.y(), (low.y() + high.y()) / 2, high.y()})
                if (const double x2 = 1 - y * y - z * z; x2 > 0.04) places.push_back(distance * Vec3(std::sqrt(x2), y, z));
        return places;
    }

    // All that enters, as the part that each criterion judges.
    static WorstImageParts whole(const Place& place) {
        WorstImageParts parts;
        for (std::size_t c = 0; c < 4; ++c) {
            parts[c].worst = place.as_point[c];
            for (const EnteringBeam& beam : place.light.beams) parts[c].zones.push_back(beam.zone);
            std::ranges::sort(parts[c].zones);
            parts[c].zones.erase(std::ranges::unique(parts[c].zones).begin(), parts[c].zones.end());
        }
        return parts;
    }

    // Places and foci that may be worse than what is known, most promising first.
    [[nodiscard]] std::vector<Item> items_of(const std::vector<Place>& places) const {
        std::vector<std::vector<Item>> of_place(places.size());
        parallel_for(places.size(), "looking for the worst focus of the eye", progress_,
                     [&](std::size_t p) { of_place[p] = items_at(p, places[p]); });
        std::vector<Item> items;
        for (const std::vector<Item>& some : of_place) items.insert(items.end(), some.begin(), some.end());
        std::ranges::stable_sort(items, std::greater{}, &Item::promise);
        return items;
    }

    [[nodiscard]] std::vector<Item> items_at(std::size_t index, const Place& place) const {
        LightRatios ratios{.as_point = ratios_of(place.as_point), .per_energy = per_energy_};
        if (place.light.beams.empty() || promise_of(ratios.as_point, found_.known) <= 1 + search_slack) return {};
        // C5 falls with the number of pulses: that of all beams together is the least.
        ratios.per_energy[train] = std::max(per_energy_[single], per_energy_[group]) / place.as_point[train].C5;
        std::vector<Item> items;
        for (const double vergence : vergences(place.light)) {
            Item item{.place = index, .vergence = vergence, .bound = image_bound(retinal_image(place.light, vergence), ratios, found_.known), .promise = 0};
            item.promise = promise_of(item.bound, found_.known);
            if (item.promise > 1 + search_slack) items.push_back(item);
        }
        return items;
    }

    // Batches in a fixed order, each judged against what the batches before it found: the same for any threads.
    void search_items(const std::vector<Place>& places, const std::vector<Item>& items) {
        std::size_t size = 1;  // the most promising first, alone, to know something
        for (std::size_t first = 0; first < items.size() && !enough(); first += size, size = std::min(batch, 2 * size)) {
            const std::size_t count = std::min(size, items.size() - first);
            std::vector<WindowSearch> results(count);
            parallel_for(count, "looking for the worst part of the image", progress_, [&](std::size_t i) {
                const Item& item = items[first + i];
                if (promise_of(item.bound, found_.known) <= 1 + search_slack) return;
                results[i] = search_windows(pattern_, retinal_image(places[item.place].light, item.vergence), dwell_of_zone_,
                                            found_.known, search_slack);
            });
            for (std::size_t i = 0; i < count; ++i) {
                const Item& item = items[first + i];
                (results[i].nodes > 0 ? found_.work.images : found_.work.skipped) += 1;
                found_.work.families += results[i].nodes;
                keep(results[i].parts, places[item.place].light.eye, item.vergence);
            }
        }
    }

    void keep(const WorstImageParts& parts, const EyePlace& eye, double vergence) {
        for (std::size_t c = 0; c < 4; ++c) {
            if (parts[c].worst.ratio <= found_.known[c]) continue;
            found_.known[c] = parts[c].worst.ratio;
            found_.worst[c] = {question_.condition, pattern_.curve.mechanism, parts[c], eye, vergence};
        }
    }

    // Places and foci one step around the worst case; the step is a share of the pupil's radius, of a tenth of the
    // distance and of a dioptre.
    void look_around(double step) {
        const EyeCase centre = worst();
        const double distance = centre.eye.place.norm();
        const Vec3 forward = centre.eye.place / distance;
        const Vec3 aside = forward.cross(std::abs(forward.z()) < 0.9 ? Vec3::UnitZ() : Vec3::UnitY()).normalized();
        const Vec3 up = aside.cross(forward);
        std::vector<EyeCase> trials;
        const auto add = [&](const Vec3& place, double vergence) {
            EyeCase trial = centre;
            trial.eye.place = place, trial.vergence = std::clamp(vergence, 0.0, 10.0);
            trials.push_back(trial);
        };
        for (const double dy : {-step, 0.0, step})
            for (const double dz : {-step, 0.0, step})
                add((centre.eye.place + radius_ * (dy * aside + dz * up)).normalized() * distance, centre.vergence);
        for (const double change : {-step, step}) {
            if (retinal_) add(centre.eye.place, centre.vergence + change);
            add(forward * std::max(nearest_, distance * (1 + 0.1 * change)), centre.vergence);
        }
        std::vector<WorstImageParts> parts(trials.size());
        parallel_for(trials.size(), "looking closer", progress_, [&](std::size_t i) {
            const Place place = place_at(trials[i].eye.place);
            if (place.light.beams.empty()) return;
            parts[i] = retinal_ ? search_windows(pattern_, retinal_image(place.light, trials[i].vergence), dwell_of_zone_, found_.known, 0).parts
                                : whole(place);
        });
        found_.work.images += trials.size();
        for (std::size_t i = 0; i < trials.size(); ++i) keep(parts[i], trials[i].eye, trials[i].vergence);
    }

    const TimePattern& pattern_;
    const EyeQuestion& question_;
    const Progress& progress_;
    EyeSearch found_;
    std::vector<int> dwell_of_zone_;
    bool retinal_;
    Ratios per_energy_{};
    double radius_ = 0;
    double nearest_ = 0;
};

}  // namespace

double EyeSearch::worst_ratio() const {
    double largest = 0;
    for (const EyeCase& each : worst) largest = std::max(largest, each.part.worst.ratio);
    return largest;
}

EyeSearch search_eyes(const EyeQuestion& question, EyeSearch before, const Progress& progress) {
    Search search(question, std::move(before), progress);
    search.everywhere();
    return search.result();
}

EyeSearch search_eyes_at(const EyeQuestion& question, std::span<const Vec3> places, EyeSearch before, const Progress& progress) {
    Search search(question, std::move(before), progress);
    search.look(places);
    return search.result();
}

}  // namespace glint
