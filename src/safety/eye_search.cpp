// The eye search: places and foci in order of promise, and a closer look around the worst.
#include "eye_places.h"
#include "hardest_image.h"

#include <glint/core/constants.h>
#include <glint/safety/eye_search.h>
#include <glint/safety/image_bound.h>

#include <algorithm>
#include <cmath>
#include <iterator>

namespace glint {
namespace {

constexpr double growth_of_distance = 1.2;
constexpr double farthest = 1e4;  // m
constexpr std::size_t single = static_cast<std::size_t>(PulseCriterion::single),
                      group = static_cast<std::size_t>(PulseCriterion::group),
                      train = static_cast<std::size_t>(PulseCriterion::train);
constexpr std::size_t batch = 64;
constexpr std::size_t many_beams = 1024;

// A focus of the eye, with a bound on what its image can give.
struct Focus {
    double vergence;
    Ratios bound;
    double promise;  // largest bound over what is known
};

// A place of the eye and what enters there.
struct Place {
    EyePlace eye;
    std::size_t beams = 0;  // that enter
    TimedRatios
        as_point{};  // all that enters taken as a point, where above what is known: no part gives more
    std::vector<Focus> foci;  // those that may be worse than what is known
};

// One of them.
struct Item {
    const Place* place;
    const Focus* focus;
};

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
        : pattern_(question.pattern),
          question_(question),
          progress_(progress),
          found_(std::move(before)),
          dwell_of_zone_(static_cast<std::size_t>(question.field.zones), 0),
          slack_(slack_for(question.field, question.accuracy)),
          retinal_(question.pattern.curve.mechanism == Mechanism::retinal_thermal) {
        for (int dwell = 0; dwell < pattern_.plan.dwells(); ++dwell)
            for (const int zone : pattern_.plan.zones_of(dwell)) dwell_of_zone_[zone] = dwell;
        found_.slack = std::max(found_.slack, slack_);
        const MeasurementCondition at = measurement(question.condition, pattern_.rules.wavelength,
                                                    std::min(pattern_.rules.durations.to, 10.0));
        radius_ = at.aperture / 2;
        nearest_ = std::max(at.distance, question.closest_access);
        per_energy_ = ratios_of(
            worst_over_time(pattern_, std::array{DwellEnergy{.dwell = 0, .energy = 1}}, all_as_point));
        // A pulse alone makes no group, but it adds to one.
        per_energy_[group] = std::max(per_energy_[group], 1 / pattern_.group_limit);
    }

    void everywhere() {
        if (nothing_at_all()) return;
        // A few places first: the more is known, the less has to be looked at.
        for (double distance = nearest_; distance < farthest && !question_.field.alike;
             distance *= growth_of_distance)
            if (!look(few_places(question_.field, distance)) || enough()) break;
        if (worst_is_ours()) closer();

        // Beyond some distance even all the light, taken as a point, is less than what was found nearer.
        for (double distance = nearest_; distance < farthest; distance *= growth_of_distance)
            if (enough() || !look(all_places(question_.field, distance, radius_))) break;
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
        std::erase_if(places, [&](const Place& place) { return !promising(place); });
        if (places.empty()) return false;
        if (!retinal_)
            keep_whole(places);
        else {
            search_alike(places);
            search_items(items_of(places));
        }
        return true;
    }

private:
    // Whether all the light of the module through one pupil would not matter.
    [[nodiscard]] bool nothing_at_all() const {
        EnteringLight all;
        for (const Beam& beam : question_.field.beams)
            all.beams.push_back({.zone = beam.zone, .energy = beam.power * pattern_.plan.pulse_width});
        return all.beams.empty() || promise_of(ratios_of(as_point(all)), found_.known) <= 1;
    }

    [[nodiscard]] bool enough() const { return found_.worst_ratio() > question_.enough; }
    [[nodiscard]] const EyeCase& worst() const {
        return *std::ranges::max_element(found_.worst, {},
                                         [](const EyeCase& each) { return each.part.worst.ratio; });
    }
    [[nodiscard]] bool worst_is_ours() const {
        return worst().part.worst.ratio > 0 && worst().condition == question_.condition &&
               worst().mechanism == pattern_.curve.mechanism;
    }

    [[nodiscard]] TimedRatios as_point(const EnteringLight& light) const {
        std::vector<DwellEnergy> dwells;
        dwells.reserve(light.beams.size());
        for (const EnteringBeam& beam : light.beams)
            dwells.push_back({dwell_of_zone_[beam.zone], beam.energy});
        std::ranges::stable_sort(dwells, {}, &DwellEnergy::dwell);
        std::size_t last = 0;
        for (std::size_t i = 1; i < dwells.size(); ++i) {
            if (dwells[i].dwell == dwells[last].dwell)
                dwells[last].energy += dwells[i].energy;
            else
                dwells[++last] = dwells[i];
        }
        if (!dwells.empty()) dwells.resize(last + 1);
        PartSize size = all_as_point;
        size.family = retinal_;  // a bound is enough: the parts of the image are looked at
        return worst_over_time(pattern_, dwells, size, found_.known);
    }

    [[nodiscard]] bool promising(const Place& place) const {
        return promise_of(ratios_of(place.as_point), found_.known) > 1 + (retinal_ ? slack_ : 0);
    }

    // Of a field whose beams all enter a pupil at that place and are alike: searched by search_alike().
    [[nodiscard]] bool all_alike(const Place& place) const {
        return question_.field.alike && place.beams == question_.field.beams.size();
    }

    [[nodiscard]] EnteringLight light_at(const EyePlace& eye) const {
        return entering_light(question_.field, eye, pattern_.plan.pulse_width);
    }

    [[nodiscard]] Place place_at(const Vec3& where) const {
        const EyePlace eye{.place = where, .pupil_radius = radius_};
        const EnteringLight light = light_at(eye);
        Place place{.eye = eye, .beams = light.beams.size(), .as_point = as_point(light), .foci = {}};
        if (retinal_ && !all_alike(place) && promising(place)) place.foci = foci_at(place, light);
        return place;
    }

    [[nodiscard]] std::vector<Focus> foci_at(const Place& place, const EnteringLight& light) const {
        const LightRatios ratios{.as_point = ratios_of(place.as_point), .per_energy = per_energy_};
        std::vector<Focus> list;
        for (const double vergence : foci(light)) {
            const Ratios bound =
                image_bound(pattern_, retinal_image(light, vergence), dwell_of_zone_, ratios, found_.known);
            const double promise = promise_of(bound, found_.known);
            if (promise > 1 + slack_) list.push_back({vergence, bound, promise});
        }
        return list;
    }

    [[nodiscard]] WindowSearch search(std::span<const Spot> image, double slack) const {
        return search_windows(pattern_, image, dwell_of_zone_, found_.known, slack);
    }

    // Where C5 depends on the size of the whole image, it jumps at foci between those of vergences().
    [[nodiscard]] std::vector<double> foci(const EnteringLight& light) const {
        std::vector<double> list = vergences(light);
        if (pattern_.plan.pulse_width <= pattern_.group_time || list.size() < 2) return list;
        const std::array jumps{5e-3, alpha_max(pattern_.plan.pulse_width), 100e-3};
        const std::vector<double> more = crossings(light, list, jumps);
        list.insert(list.end(), more.begin(), more.end());
        return list;
    }

    // For limits without an angle all that enters is the part that each criterion judges.
    [[nodiscard]] WorstImageParts whole(const Place& place) const {
        WorstImageParts parts;
        std::vector<int> zones;
        for (const EnteringBeam& beam : light_at(place.eye).beams) zones.push_back(beam.zone);
        std::ranges::sort(zones);
        zones.erase(std::ranges::unique(zones).begin(), zones.end());
        for (std::size_t c = 0; c < 4; ++c) parts[c].worst = place.as_point[c], parts[c].zones = zones;
        return parts;
    }

    void keep_whole(std::span<const Place> places) {
        for (const Place& place : places)
            if (promise_of(ratios_of(place.as_point), found_.known) > 1) keep(whole(place), place.eye, 0);
    }

    // Beams that are alike make images that differ between places in size and brightness only. So the worst
    // of many places is at most that of the brightest of each beam in the smallest of their images: places
    // are looked at all together, and divided only when that is too much.
    void search_alike(const std::vector<Place>& all) {
        std::vector<Place> places;
        std::ranges::copy_if(all, std::back_inserter(places),
                             [&](const Place& place) { return all_alike(place); });
        if (places.empty()) return;
        std::ranges::stable_sort(places, std::greater{}, [&](const Place& place) {
            return promise_of(ratios_of(place.as_point), found_.known);
        });
        if (std::ranges::all_of(found_.known, [](double known) { return known <= 0; }))
            search_place(places.front());
        search_set(places);
    }

    void search_set(std::span<const Place> places) {
        if (places.size() == 1) return search_place(places.front());
        if (enough() || !may_be_worse(places)) return;
        search_set(places.first(places.size() / 2));
        search_set(places.subspan(places.size() / 2));
    }

    // Every focus at one place.
    void search_place(const Place& place) {
        const EnteringLight light = light_at(place.eye);
        std::vector<double> list = foci(light);
        // The sharpest image first: it is often the worst, and makes short work of the others.
        std::ranges::sort(list, {}, [&](double vergence) {
            return spot_of(light.beams.front(), light, vergence).half.sum();
        });
        for (std::size_t first = 0, count = 1; first < list.size() && !enough();
             first += count, count = list.size() - first) {
            std::vector<WindowSearch> results(count);
            parallel_for(count, "looking for the worst part of the image", progress_, [&](std::size_t i) {
                results[i] = search(retinal_image(light, list[first + i]), slack_);
            });
            for (std::size_t i = 0; i < count; ++i) {
                ++found_.work.images;
                found_.work.families += results[i].nodes;
                keep(results[i].parts, place.eye, list[first + i]);
            }
        }
    }

    // Whether an image as bright as at any of the places, and as small and sharp as at any of them for any
    // focus, gives more than is known.
    bool may_be_worse(std::span<const Place> places) {
        std::vector<ImageExtremes> of_place(places.size());
        parallel_for(places.size(), "looking for the worst place of the eye", progress_, [&](std::size_t i) {
            const EnteringLight light = light_at(places[i].eye);
            of_place[i] = extremes_of(light, foci(light));
        });
        ImageExtremes all = std::move(of_place.front());
        for (const ImageExtremes& each : std::span(of_place).subspan(1)) include(all, each);
        const std::vector<Spot> image = hardest_image(light_at(places.front().eye), all);
        const WindowSearch found =
            search_windows(pattern_, image, dwell_of_zone_, found_.known, slack_, all.whole);
        ++found_.work.images;
        found_.work.families += found.nodes;
        return std::ranges::any_of(found.parts, [](const ImagePart& part) { return part.worst.ratio > 0; });
    }

    // Places and foci that may be worse than what is known, most promising first.
    [[nodiscard]] static std::vector<Item> items_of(const std::vector<Place>& places) {
        std::vector<Item> items;
        for (const Place& place : places)
            for (const Focus& focus : place.foci) items.push_back({&place, &focus});
        std::ranges::stable_sort(items, std::greater{}, [](const Item& item) { return item.focus->promise; });
        return items;
    }

    // Batches in a fixed order, each judged against what the batches before it found: the same for any
    // threads.
    void search_items(const std::vector<Item>& items) {
        std::size_t size = 1;  // the most promising first, alone, to know something
        for (std::size_t first = 0; first < items.size() && !enough();
             first += size, size = std::min(batch, 2 * size)) {
            const std::size_t count = std::min(size, items.size() - first);
            std::vector<WindowSearch> results(count);
            parallel_for(count, "looking for the worst part of the image", progress_, [&](std::size_t i) {
                const Item& item = items[first + i];
                if (promise_of(item.focus->bound, found_.known) <= 1 + slack_) return;
                results[i] = search(retinal_image(light_at(item.place->eye), item.focus->vergence), slack_);
            });
            for (std::size_t i = 0; i < count; ++i) {
                const Item& item = items[first + i];
                (results[i].nodes > 0 ? found_.work.images : found_.work.skipped) += 1;
                found_.work.families += results[i].nodes;
                keep(results[i].parts, item.place->eye, item.focus->vergence);
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

    // Places and foci one step around the worst case; the step is a share of the pupil's radius, of a tenth
    // of the distance and of a dioptre.
    void look_around(double step) {
        const EyeCase centre = worst();
        const double distance = centre.eye.place.norm();
        const Vec3 forward = centre.eye.place / distance;
        const Vec3 aside =
            forward.cross(std::abs(forward.z()) < 0.9 ? Vec3::UnitZ() : Vec3::UnitY()).normalized();
        const Vec3 up = aside.cross(forward);
        std::vector<EyeCase> trials;
        const auto add = [&](const Vec3& place, double vergence) {
            EyeCase trial = centre;
            trial.eye.place = place, trial.vergence = std::clamp(vergence, 0.0, 10.0);
            trials.push_back(trial);
        };
        for (const double dy : {-step, 0.0, step})
            for (const double dz : {-step, 0.0, step})
                add((centre.eye.place + radius_ * (dy * aside + dz * up)).normalized() * distance,
                    centre.vergence);
        for (const double change : {-step, step}) {
            if (retinal_) add(centre.eye.place, centre.vergence + change);
            add(forward * std::max(nearest_, distance * (1 + 0.1 * change)), centre.vergence);
        }
        std::vector<WorstImageParts> parts(trials.size());
        parallel_for(trials.size(), "looking closer", progress_, [&](std::size_t i) {
            if (retinal_)
                parts[i] = search(retinal_image(light_at(trials[i].eye), trials[i].vergence),
                                  slack_ > search_slack ? slack_ : 0)
                               .parts;
            else
                parts[i] = whole(place_at(trials[i].eye.place));
        });
        found_.work.images += trials.size();
        for (std::size_t i = 0; i < trials.size(); ++i) keep(parts[i], trials[i].eye, trials[i].vergence);
    }

    const TimePattern& pattern_;
    const EyeQuestion& question_;
    const Progress& progress_;
    EyeSearch found_;
    std::vector<int> dwell_of_zone_;
    double slack_;
    bool retinal_;
    Ratios per_energy_{};
    double radius_ = 0;
    double nearest_ = 0;
};

}  // namespace

double slack_for(const FarField& field, Accuracy accuracy) {
    if (accuracy == Accuracy::coarse) return search_slack_of_many;
    return field.alike && field.beams.size() > many_beams ? search_slack_of_many : search_slack;
}

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

EyeSearch search_eyes_at(const EyeQuestion& question, std::span<const Vec3> places, EyeSearch before,
                         const Progress& progress) {
    Search search(question, std::move(before), progress);
    search.look(places);
    return search.result();
}

}  // namespace glint
