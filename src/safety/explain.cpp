// What stands behind a verdict: the governing image, its emission over time, and the ratio over the field.
#include <glint/core/constants.h>
#include <glint/core/parallel.h>
#include <glint/safety/explain.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

namespace glint {
namespace {

constexpr double narrowest_view = 6e-3, widest_view = 110e-3;  // rad
constexpr double least_cells = 320, most_cells = 480;          // of the image, along its longer side
constexpr double cells_of_spot = 6;                            // along the narrowest spot, where they suffice
constexpr int curve_points = 600;
constexpr double most_cells_of_map = 61, fewest_cells_of_map = 13;  // along its longer side
constexpr double many_beams = 100;     // in an image: beyond them the map is coarser, to save time
constexpr double coarse_cells = 40;    // of a first look at where light goes
constexpr double least_of_map = 0.01;  // of the governing ratio: not looked for; of the light: not shown
constexpr double map_slack = 0.03;     // share by which a ratio of the map may be too low
constexpr double steepest = 80;        // deg, edge of the map
constexpr double never = 1e300;

bool has_part(const GoverningCase& governing) {
    return governing.found.mechanism == Mechanism::retinal_thermal;
}

// An upright rectangle [rad].
struct AngleBox {
    Vec2 low = Vec2::Constant(never), high = Vec2::Constant(-never);

    void include(const Vec2& more_low, const Vec2& more_high) {
        low = low.cwiseMin(more_low), high = high.cwiseMax(more_high);
    }
    [[nodiscard]] Vec2 size() const { return high - low; }
    [[nodiscard]] Vec2 middle() const { return (low + high) / 2; }
};

// Spots as seen along the line of sight, to the module's right and up.
std::vector<Spot> seen_spots(const std::vector<Spot>& image, const EyePlace& eye) {
    const Vec2 sight = line_of_sight(eye);
    std::vector<Spot> seen = image;
    for (Spot& spot : seen) spot.middle = {sight.x() - spot.middle.x(), spot.middle.y() - sight.y()};
    return seen;
}

AngleBox seen_part(const EyeCase& found) {
    const Vec2 sight = line_of_sight(found.eye);
    AngleBox part;
    part.include({sight.x() - found.part.high.x(), found.part.low.y() - sight.y()},
                 {sight.x() - found.part.low.x(), found.part.high.y() - sight.y()});
    return part;
}

// What of the image is worth showing, never flatter than two to five.
AngleBox view_of(const std::vector<Spot>& spots, const std::optional<AngleBox>& part) {
    AngleBox view;
    for (const Spot& spot : spots) view.include(spot.middle - spot.half, spot.middle + spot.half);
    if (part) view.include(part->low, part->high);
    const Vec2 rim = Vec2::Constant(0.06 * view.size().maxCoeff());
    view.low -= rim, view.high += rim;
    if (part) {
        const double half = std::clamp(3 * part->size().maxCoeff(), narrowest_view, widest_view) / 2;
        view.low = view.low.cwiseMax(part->middle() - Vec2::Constant(half));
        view.high = view.high.cwiseMin(part->middle() + Vec2::Constant(half));
    }
    const Vec2 half = (view.size() / 2).cwiseMax(0.2 * view.size().maxCoeff()), middle = view.middle();
    return {middle - half, middle + half};
}

// First cell and shares of the cells that the stretch from `low` to `high` covers; `low`, `high` in cells
// from the edge.
struct CoveredCells {
    std::size_t first = 0;
    std::vector<double> shares;  // of the stretch
};

CoveredCells covered_cells(double low, double high, std::size_t count) {
    CoveredCells covered;
    const double begin = std::max(low, 0.0), end = std::min(high, static_cast<double>(count));
    if (begin >= end) return covered;
    covered.first = static_cast<std::size_t>(begin);
    for (double cell = std::floor(begin); cell < end; ++cell)
        covered.shares.push_back((std::min(cell + 1, end) - std::max(cell, begin)) / (high - low));
    return covered;
}

void add_spot(GoverningImage& image, const Spot& spot, double cell) {
    const Vec2 low = (spot.middle - spot.half - image.low) / cell,
               high = (spot.middle + spot.half - image.low) / cell;
    const CoveredCells across = covered_cells(low.x(), high.x(), image.columns),
                       up = covered_cells(low.y(), high.y(), image.rows);
    for (std::size_t r = 0; r < up.shares.size(); ++r)
        for (std::size_t c = 0; c < across.shares.size(); ++c) {
            const std::size_t row = image.rows - 1 - (up.first + r);
            const double energy = spot.energy * up.shares[r] * across.shares[c];
            image.density[row * image.columns + across.first + c] += energy / (cell * cell);
            image.shown += energy;
        }
}

std::vector<int> dwell_of_zones(const LightSource& light) {
    std::vector<int> dwells(static_cast<std::size_t>(light.field.zones), 0);
    for (int dwell = 0; dwell < light.plan.dwells(); ++dwell)
        for (const int zone : light.plan.zones_of(dwell)) dwells[zone] = dwell;
    return dwells;
}

// Share of the length from `low` to `high` that lies within `from` and `to`.
double share_within(double low, double high, double from, double to) {
    return std::max(0.0, std::min(high, to) - std::max(low, from)) / (high - low);
}

// Energies per shot by dwell, in time order.
std::vector<DwellEnergy> by_dwell(std::vector<DwellEnergy> parts) {
    std::ranges::stable_sort(parts, {}, &DwellEnergy::dwell);
    std::vector<DwellEnergy> dwells;
    for (const DwellEnergy& part : parts) {
        if (part.energy <= 0) continue;
        if (dwells.empty() || dwells.back().dwell != part.dwell) dwells.push_back({part.dwell, 0});
        dwells.back().energy += part.energy;
    }
    return dwells;
}

// Of all that enters.
std::vector<DwellEnergy> entering_energies(const EnteringLight& entering,
                                           const std::vector<int>& dwell_of_zone) {
    std::vector<DwellEnergy> parts;
    for (const EnteringBeam& beam : entering.beams) parts.push_back({dwell_of_zone[beam.zone], beam.energy});
    return by_dwell(std::move(parts));
}

// Of what lies inside the part.
std::vector<DwellEnergy> part_energies(const std::vector<Spot>& image, const ImagePart& part,
                                       const std::vector<int>& dwell_of_zone) {
    std::vector<DwellEnergy> parts;
    for (const Spot& spot : image) {
        const Vec2 low = spot.middle - spot.half, high = spot.middle + spot.half;
        const double share = share_within(low.x(), high.x(), part.low.x(), part.high.x()) *
                             share_within(low.y(), high.y(), part.low.y(), part.high.y());
        parts.push_back({dwell_of_zone[spot.zone], share * spot.energy});
    }
    return by_dwell(std::move(parts));
}

std::vector<double> curve_durations(const TimePattern& pattern, double governing) {
    const double first = pattern.plan.pulse_width, last = pattern.rules.time_base;
    std::vector<double> durations{governing};
    for (int i = 0; i <= curve_points; ++i)
        durations.push_back(first * std::pow(last / first, static_cast<double>(i) / curve_points));
    durations.back() = last;
    for (const double bend : pattern.curve.bends)
        if (bend > first && bend < last) durations.push_back(bend);
    std::ranges::sort(durations);
    durations.erase(std::unique(durations.begin(), durations.end()), durations.end());
    return durations;
}

// Most that starts within a duration, whole frames counted apart.
double most_emitted(const TimePattern& pattern, const std::vector<DwellEnergy>& dwells, double duration) {
    const double period = pattern.plan.frame_period;
    const double frames = std::floor(duration / period * (1 + 1e-12));
    double frame_energy = 0;
    for (const DwellEnergy& dwell : dwells) frame_energy += pattern.plan.shots * dwell.energy;
    return frames * frame_energy + energy_within(pattern, dwells, std::max(0.0, duration - frames * period));
}

EnteringLight entering_at(const LightSource& light, const EyePlace& eye) {
    return entering_light(light.field, eye, light.plan.pulse_width);
}

// Horizontal angle to the right and vertical angle up [rad], and the direction that has them.
Vec2 angles_of(const Vec3& direction) {
    return {std::atan2(-direction.y(), direction.x()),
            std::atan2(direction.z(), std::hypot(direction.x(), direction.y()))};
}

Vec3 direction_of(const Vec2& angles) {
    return {std::cos(angles.y()) * std::cos(angles.x()), -std::cos(angles.y()) * std::sin(angles.x()),
            std::sin(angles.y())};
}

// A raster of directions around a box, `across` cells along its longer side, one with its middle at a given
// place.
struct DirectionRaster {
    Vec2 low = Vec2::Zero();
    double cell = 0;
    std::size_t columns = 0, rows = 0;

    DirectionRaster(const AngleBox& around, const Vec2& middle, double across)
        : cell(around.size().maxCoeff() / across) {
        const Vec2 below = ((middle - around.low) / cell - Vec2::Constant(0.5)).array().ceil().max(0);
        const Vec2 above = ((around.high - middle) / cell - Vec2::Constant(0.5)).array().ceil().max(0);
        low = middle - cell * (below + Vec2::Constant(0.5));
        columns = static_cast<std::size_t>(below.x() + above.x()) + 1,
        rows = static_cast<std::size_t>(below.y() + above.y()) + 1;
    }
    [[nodiscard]] std::size_t size() const { return columns * rows; }
    // Middle of a cell; cells run row by row from the top.
    [[nodiscard]] Vec2 middle(std::size_t i) const {
        return low + cell * Vec2(static_cast<double>(i % columns) + 0.5,
                                 static_cast<double>(rows - 1 - i / columns) + 0.5);
    }
};

EyePlace eye_at(const Vec2& angles, const EyePlace& like) {
    return {.place = like.place.norm() * direction_of(angles), .pupil_radius = like.pupil_radius};
}

// Directions in which light enters a pupil like this one.
AngleBox lit_directions(const LightSource& light, const EyePlace& eye) {
    const double aside = (light.field.spread + light.field.widest_exit + eye.pupil_radius) / eye.place.norm();
    const Vec2 place = angles_of(eye.place), edge = Vec2::Constant(radians(steepest));
    AngleBox reached, lit{place, place};
    for (const Beam& beam : light.field.beams) {
        const Vec2 axis = angles_of(beam.axis), near = Vec2::Constant(aside),
                   reach = Vec2::Constant(std::atan(beam.kernel.reach) + aside);
        lit.include(axis - near, axis + near);
        reached.include(axis - reach, axis + reach);
    }
    reached.low = reached.low.cwiseMax(-edge).cwiseMin(place),
    reached.high = reached.high.cwiseMin(edge).cwiseMax(place);
    // Wide kernels light far more than their axes, and reach far beyond where they still send much.
    const DirectionRaster raster(reached, place, coarse_cells);
    std::vector<double> passed(raster.size());
    parallel_for(raster.size(), [&](std::size_t i) {
        const EyePlace there = eye_at(raster.middle(i), eye);
        if (there.place.x() > 0) passed[i] = entering_at(light, there).passed;
    });
    const double least = least_of_map * *std::ranges::max_element(passed);
    const Vec2 half = Vec2::Constant(raster.cell / 2);
    for (std::size_t i = 0; i < raster.size(); ++i)
        if (passed[i] > least) lit.include(raster.middle(i) - half, raster.middle(i) + half);
    return {lit.low.cwiseMax(-edge), lit.high.cwiseMin(edge)};
}

// Largest ratio of all criteria at one place, without the allowance.
double ratio_at(const LightSource& light, const GoverningCase& governing,
                const std::vector<int>& dwell_of_zone, const EyePlace& eye) {
    const EnteringLight entering = entering_at(light, eye);
    if (entering.beams.empty()) return 0;
    double most = 0;
    if (!has_part(governing)) {
        for (const TimedRatio& each :
             worst_over_time(governing.pattern, entering_energies(entering, dwell_of_zone), all_as_point))
            most = std::max(most, each.ratio);
        return most;
    }
    const std::vector<Spot> image = retinal_image(entering, governing.found.vergence);
    // The governing criterion first: it leaves little to find for the others.
    const auto first = static_cast<std::size_t>(governing.criterion);
    const auto look = [&](const Ratios& floor) {
        for (const ImagePart& part : search_windows(governing.pattern, image, dwell_of_zone, floor,
                                                    std::max(map_slack, governing.slack))
                                         .parts)
            most = std::max(most, part.worst.ratio);
    };
    const double least = least_of_map * governing.found.part.worst.ratio;
    Ratios floor;
    floor.fill(never), floor[first] = least;
    look(floor);
    floor.fill(std::max(most, least)), floor[first] = never;
    look(floor);
    return most;
}

}  // namespace

std::optional<GoverningCase> governing_case(const SafetyVerdict& verdict, double time_base) {
    if (verdict.criteria.empty()) return std::nullopt;
    GoverningCase governing{.criterion = verdict.criteria.front().criterion, .found = {}, .pattern = {}};
    governing.found = verdict.found.worst[static_cast<std::size_t>(governing.criterion)];
    governing.slack = verdict.found.slack;
    for (TimePattern& pattern : patterns_of(verdict.light, LaserClass::class_1, time_base)) {
        if (pattern.rules.mechanism != governing.found.mechanism ||
            !touches(pattern.rules.durations, governing.found.part.worst.duration))
            continue;
        governing.pattern = std::move(pattern);
        return governing;
    }
    return std::nullopt;
}

GoverningImage governing_image(const LightSource& light, const GoverningCase& governing) {
    const EyeCase& found = governing.found;
    const EnteringLight entering = entering_at(light, found.eye);
    const std::vector<Spot> spots = seen_spots(retinal_image(entering, found.vergence), found.eye);
    const AngleBox view =
        view_of(spots, has_part(governing) ? std::optional(seen_part(found)) : std::nullopt);
    double narrowest = widest_view;
    for (const Spot& spot : spots) narrowest = std::min(narrowest, 2 * spot.half.minCoeff());
    const double longer = view.size().maxCoeff();
    const double cell = longer / std::clamp(cells_of_spot * longer / narrowest, least_cells, most_cells);
    GoverningImage image{.low = view.low};
    image.columns = static_cast<std::size_t>(std::lround(view.size().x() / cell));
    image.rows = static_cast<std::size_t>(std::lround(view.size().y() / cell));
    image.high = image.low + cell * Vec2(image.columns, image.rows);
    image.density.assign(image.columns * image.rows, 0);
    for (const Spot& spot : spots) add_spot(image, spot, cell);
    image.entering = entering.passed;
    return image;
}

EmissionCurve emission_curve(const LightSource& light, const GoverningCase& governing) {
    const EyeCase& found = governing.found;
    const TimePattern& pattern = governing.pattern;
    const EnteringLight entering = entering_at(light, found.eye);
    const std::vector<int> dwell_of_zone = dwell_of_zones(light);
    const bool part = has_part(governing);
    const std::vector<DwellEnergy> dwells =
        part ? part_energies(retinal_image(entering, found.vergence), found.part, dwell_of_zone)
             : entering_energies(entering, dwell_of_zone);
    // Limits without an angle have one row that asks for an extended source; it counts, as in the search.
    const double subtense = part ? found.part.subtense : 2 * alpha_min;
    EmissionCurve curve{.durations = curve_durations(pattern, found.part.worst.duration)};
    if (part) curve.allowed_from = shortest_duration((found.part.high - found.part.low).maxCoeff());
    for (const double duration : curve.durations) {
        curve.emission.push_back(allowance_for(governing.slack) * most_emitted(pattern, dwells, duration));
        const bool counts =
            duration >= curve.allowed_from * (1 - 1e-9) && touches(pattern.rules.durations, duration);
        const double in_tables = std::clamp(duration, limit_durations.from, limit_durations.to);
        const double limit =
            counts ? pattern.curve.energy(in_tables, subtense, part ? t2(subtense) : t2(0)) : std::nan("");
        curve.limit.push_back(std::isfinite(limit) ? limit : std::nan(""));
    }
    return curve;
}

SafetyMap safety_map(const LightSource& light, const GoverningCase& governing) {
    const EyePlace& eye = governing.found.eye;
    SafetyMap map{.governing = angles_of(eye.place), .distance = eye.place.norm()};
    const double beams = static_cast<double>(entering_at(light, eye).beams.size());
    const double cells =
        std::clamp(most_cells_of_map * std::sqrt(many_beams / beams), fewest_cells_of_map, most_cells_of_map);
    const DirectionRaster raster(lit_directions(light, eye), map.governing, cells);
    map.columns = raster.columns, map.rows = raster.rows;
    map.low = raster.low, map.high = raster.low + raster.cell * Vec2(raster.columns, raster.rows);
    map.ratios.assign(raster.size(), 0);
    const std::vector<int> dwell_of_zone = dwell_of_zones(light);
    parallel_for(raster.size(), [&](std::size_t i) {
        const EyePlace there = eye_at(raster.middle(i), eye);
        if (there.place.x() > 0)
            map.ratios[i] = allowance_for(governing.slack) * ratio_at(light, governing, dwell_of_zone, there);
    });
    return map;
}

}  // namespace glint
