// One design worked through from the emitter to the verdict.
#include <glint/emitter/layout.h>
#include <glint/plan/assess.h>
#include <glint/plan/requirements.h>
#include <glint/ranging/spectrum.h>
#include <glint/scene/scene_file.h>

#include <fmt/format.h>
#include <algorithm>

namespace glint {
namespace {

std::vector<Point> form_points(const Returns& returns, int columns, double least_probability) {
    std::vector<Point> points;
    const auto pixel = [&](const Return& entry) { return entry.row * columns + entry.column; };
    for (std::size_t first = 0; first < returns.list.size();) {
        // A pixel lit in several dwells gives one point: that of its surest return.
        const Return* best = &returns.list[first];
        std::size_t next = first;
        for (; next < returns.list.size() && pixel(returns.list[next]) == pixel(returns.list[first]); ++next)
            if (returns.list[next].detection.probability > best->detection.probability)
                best = &returns.list[next];
        first = next;
        if (best->detection.probability < least_probability) continue;
        points.push_back({.position = best->point,
                          .zone = best->zone,
                          .column = best->column,
                          .row = best->row,
                          .object = best->object,
                          .range = best->range,
                          .signal = best->detection.signal,
                          .precision = best->detection.precision,
                          .probability = best->detection.probability});
    }
    return points;
}

std::vector<ZoneReport> report_zones(const Assessment& assessment, std::vector<ZoneField> fields,
                                     std::vector<ZoneLanding> landings) {
    std::vector<ZoneReport> zones(fields.size());
    for (const int zone : assessment.array.zone_of) ++zones[zone].emitters;
    for (std::size_t z = 0; z < zones.size(); ++z) {
        zones[z].field = fields[z];
        zones[z].landing = std::move(landings[z]);
        zones[z].shot_energy = fields[z].power * assessment.plan.pulse_width;
    }
    for (const Return& entry : assessment.returns.list) {
        ZoneReport& zone = zones[entry.zone];
        ++zone.returns;
        zone.nearest_return =
            zone.nearest_return == 0 ? entry.range : std::min(zone.nearest_return, entry.range);
        zone.farthest_return = std::max(zone.farthest_return, entry.range);
    }
    for (const Point& point : assessment.points) ++zones[point.zone].points;
    return zones;
}

void refuse_blind_receiver(const Returns& returns, std::span<const PixelLight> lights) {
    if (std::ranges::none_of(lights, [](const PixelLight& light) { return light.intensity > 0; }))
        throw Error(Problem{.what = "the receiver sees nothing: no zone lights any part of its field",
                            .accepted = "a receiver field and a lit field that overlap",
                            .path = "receiver/lens/focal_length"});
    if (returns.pixels_seeing == 0)
        throw Error(Problem{
            .what = "the receiver sees nothing: no surface of the scene is in its field within the gate",
            .accepted = "a placement that looks at the scene, or a longer gate",
            .path = "placement"});
}

std::vector<std::string> collect_findings(const Design& design, const Assessment& assessment) {
    std::vector<std::string> findings;
    const double escaped = [&] {
        double sum = 0;
        for (const ZoneReport& zone : assessment.zones) sum += zone.landing.escaped;
        return sum;
    }();
    double sent = 0;
    for (const ZoneReport& zone : assessment.zones) sent += zone.field.power;
    if (escaped > 0.005 * sent)
        findings.push_back(
            fmt::format("{:.1f} % of the light meets no surface of the scene.", 100 * escaped / sent));
    for (const Loss& loss : assessment.beams.losses)
        if (loss.power > 0.2 * assessment.beams.emitted)
            findings.push_back(fmt::format("{:.0f} % of the emitted light is lost {}.",
                                           100 * loss.power / assessment.beams.emitted, loss.name));
    if (assessment.chip) {
        findings.insert(findings.end(), assessment.chip->findings.begin(), assessment.chip->findings.end());
        const Filter& filter = design.receiver.filter;
        const auto out = std::ranges::count_if(
            assessment.chip->zone_wavelength, [&](double wavelength) { return !passes(filter, wavelength); });
        if (out > 0)
            findings.push_back(
                fmt::format("{} of {} zones have drifted out of the filter's band and send nothing back.",
                            out, assessment.array.zones));
    }
    std::size_t crowded = 0;
    for (const Return& entry : assessment.returns.list)
        crowded += entry.detection.background_rate * design.receiver.photon_counting.dead_time > 0.5;
    if (crowded * 10 > assessment.returns.list.size())
        findings.push_back(fmt::format(
            "Background light keeps the detector blind for more than a third of the time in {:.0f} % of the "
            "returns.",
            100.0 * static_cast<double>(crowded) / static_cast<double>(assessment.returns.list.size())));
    return findings;
}

// The scene, or the place in the design that names it together with what is wrong in it.
Scene load_scene_of(const LoadedDesign& loaded) {
    try {
        return load_scene(loaded.folder / loaded.design.placement.scene);
    } catch (const Error& error) {
        throw named_by(error, "the scene " + loaded.design.placement.scene + " cannot be used",
                       "placement/scene");
    }
}

std::optional<Chip> chip_of(const Design& design, const EmitterArray& array, const FiringPlan& plan) {
    if (design.drive.by == DriveBy::data_sheet) return {};
    return work_chip(design, array, plan);
}

// Along the line from emitter to receiver, in windows that hold some tens of dots.
DotSearch dot_search(const Design& design, const EmitterArray& array) {
    const double spacing = nearest_distance(array.positions);
    const Vec2 baseline(design.receiver.right, design.receiver.up);
    return {.window_width = 6 * spacing,
            .window_height = 6 * spacing,
            .line = baseline.norm() > 0 ? Vec2(baseline.normalized()) : Vec2::UnitX(),
            .tolerance = 0.2 * spacing};
}

// Eye safety counts with the most that each emitter sends, from the first pulse after a cold start on.
Lit brightest_of(const Design& design, const EmitterArray& array, const std::optional<Chip>& chip) {
    return light_up(design, array, chip ? &*chip : nullptr, &EmitterState::brightest);
}

void refuse_lost_band(const Filter& filter, const std::optional<Chip>& chip) {
    if (!chip || std::ranges::any_of(chip->zone_wavelength, [&](double w) { return passes(filter, w); }))
        return;
    const auto [shortest, longest] = std::ranges::minmax(chip->zone_wavelength);
    throw Error(Problem{
        .what =
            fmt::format("every zone has drifted out of the filter's band, to {} to {}",
                        show_quantity(shortest, Kind::length, 5), show_quantity(longest, Kind::length, 5)),
        .accepted = "a pass band that holds the wavelengths of the warm chip, or a cooler chip",
        .path = "receiver/filter/center"});
}

// What passes the receiver's filter: zones that have drifted out of its band do not.
FarField received(FarField field, const Filter& filter, const std::optional<Chip>& chip) {
    if (!chip) return field;
    for (Beam& beam : field.beams)
        if (!passes(filter, chip->zone_wavelength[beam.zone])) beam.power = 0;
    return field;
}

Assessment work_through(const LoadedDesign& loaded, const Progress& progress) {
    Assessment result;
    const EmitterArray array =
        build_array(loaded.design.emitters, field_sense(loaded.design.optics), loaded.folder);
    result.plan = plan_firing(loaded.design, array);
    if (loaded.design.emitters.layout.kind == LayoutKind::scattered && array.size() > 1)
        result.dots = judge_dots(array.positions, dot_search(loaded.design, array));
    result.order = score_order(result.plan.zones, loaded.design.firing, zone_middles(array),
                               substrate_of(loaded.design.emitters.heat));
    result.drivers = count_drivers(loaded.design.emitters.addressing.scheme, array);
    result.chip = chip_of(loaded.design, array, result.plan);
    const Lit lit =
        light_up(loaded.design, array, result.chip ? &*result.chip : nullptr, &EmitterState::power);
    const Design& design = lit.design;
    result.array = lit.array;
    result.packing = packing(design.emitters, result.array);
    result.average_power = average_power(result.plan, result.array, design.drive.peak_power);
    result.beams = project(result.array, design);
    const FarField field = far_field(result.beams);

    const Scene scene = load_scene_of(loaded);
    refuse_lost_band(design.receiver.filter, result.chip);
    const FarField in_band = received(field, design.receiver.filter, result.chip);
    const Link link = make_link(design, result.plan, in_band);
    const std::vector<PixelLight> lights = pixel_lights(link, progress);
    result.returns = cast_returns(link, scene, progress);
    refuse_blind_receiver(result.returns, lights);
    result.points =
        form_points(result.returns, design.receiver.pixels.columns, design.sampling.point_probability);
    result.zones = report_zones(
        result, zone_fields(field),
        land_zones(field, link.pose, scene, design.sampling.rays_per_beam, design.sampling.seed, progress));
    for (const Object& object : scene.objects) result.object_names.push_back(object.name);
    result.points_on_object.assign(scene.objects.size(), 0);
    for (const Point& point : result.points) ++result.points_on_object[point.object];

    const Lit brightest = brightest_of(loaded.design, array, result.chip);
    result.safety = judge_safety(brightest.design, brightest.array, progress);
    JudgedRequirements judged = judge_requirements(design, result, link, lights);
    result.requirements = std::move(judged.results);
    result.reaches = std::move(judged.reaches);
    result.findings = collect_findings(design, result);
    return result;
}

// Runs a stage; what goes wrong in it gets the file and line of the field to change.
template <class Stage>
auto with_places(const LoadedDesign& loaded, const Stage& stage) {
    try {
        return stage();
    } catch (const Error& error) {
        std::vector<Problem> problems = error.problems();
        for (Problem& problem : problems)
            if (problem.file.empty()) problem = loaded.places.at(std::move(problem));
        throw Error(std::move(problems), error.blame());
    }
}

}  // namespace

bool Assessment::all_met() const {
    return std::ranges::all_of(requirements, [](const RequirementResult& each) { return each.met; });
}

Assessment assess(const LoadedDesign& loaded, const Progress& progress) {
    return with_places(loaded, [&] { return work_through(loaded, progress); });
}

SafetyVerdict assess_safety(const LoadedDesign& loaded, const Progress& progress) {
    return with_places(loaded, [&] {
        const Design& design = loaded.design;
        const EmitterArray array = build_array(design.emitters, field_sense(design.optics), loaded.folder);
        const Lit lit = brightest_of(design, array, chip_of(design, array, plan_firing(design, array)));
        SafetyVerdict verdict = judge_safety(lit.design, lit.array, progress);
        judge_faults(verdict, lit.array, progress);
        return verdict;
    });
}

}  // namespace glint
