// The hazard distance of a module, found by moving the eye away from it.
#include <glint/safety/hazard_search.h>

#include <algorithm>
#include <cmath>

namespace glint {
namespace {

constexpr double growth = 1.3;
constexpr double farthest = 1e4;  // m
constexpr double precision = 1.01;
constexpr std::size_t most_places = 400;

// Places a distance away in front of beams: the strongest ones and a sample of all.
std::vector<Vec3> in_front_of_beams(const LightSource& light, double distance, const Vec3& also) {
    std::vector<const Beam*> beams;
    for (const Beam& beam : light.field.beams) beams.push_back(&beam);
    std::ranges::stable_sort(beams, std::greater{}, [&](const Beam* beam) {
        return beam->power / std::pow(radius_at(*beam, distance), 2);
    });
    std::vector<Vec3> places{distance * also.normalized()};
    const std::size_t stride = beams.size() / most_places + 1;
    for (std::size_t i = 0; i < beams.size(); ++i)
        if (i < most_places / 4 || i % stride == 0) {
            const Vec3 place = (beams[i]->origin + distance * beams[i]->axis).normalized() * distance;
            if (place.x() > 0.2 * distance) places.push_back(place);
        }
    return places;
}

}  // namespace

double search_hazard_distance(const LightSource& light, Condition condition, double time_base,
                              const Vec3& also, const Progress& progress) {
    const double limit = limit_of_search(light);
    const std::vector<TimePattern> patterns = patterns_of(light, LaserClass::class_1, time_base);
    const auto exceeds = [&](double distance) {
        const std::vector<Vec3> places = in_front_of_beams(light, distance, also);
        EyeSearch found;
        found.known.fill(limit);
        for (const TimePattern& pattern : patterns) {
            found = search_eyes_at({pattern, light.field, condition, light.closest_access, limit}, places,
                                   std::move(found), progress);
            if (found.worst_ratio() > limit) return true;
        }
        return false;
    };
    const double nearest =
        std::max(measurement(condition, light.wavelength, 10).distance, light.closest_access);
    double last = 0;  // farthest distance that was found to be too much
    for (double distance = nearest; distance < farthest; distance *= growth)
        if (exceeds(distance)) last = distance;
    if (last == 0) return 0;
    double low = last, high = last * growth;
    while (high / low > precision) {
        const double middle = std::sqrt(low * high);
        (exceeds(middle) ? low : high) = middle;
    }
    return high;
}

}  // namespace glint
