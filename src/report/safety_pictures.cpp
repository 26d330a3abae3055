// Pictures that explain the verdict on eye safety.
#include <glint/core/constants.h>
#include <glint/core/quantity.h>
#include <glint/core/text.h>
#include <glint/report/heat_map.h>
#include <glint/report/line_plot.h>
#include <glint/report/safety_pictures.h>
#include <glint/safety/explain.h>

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <cmath>

namespace glint {
namespace {

constexpr const char* picture_note =
    "Modelled for early design from nominal data and its tolerances; no safety certificate.";

std::string title_of(const Design& design, const std::string& what) {
    return design.name.empty() ? what : what + ", " + design.name;
}

Canvas words_only(const Design& design, const std::string& what) {
    const FrameContent content{.heading = {.title = title_of(design, what),
                                           .subtitle = "No light reaches any place where an eye can be.",
                                           .note = picture_note}};
    const auto [page, frame] = fit_page({.width = 900, .height = 140}, content);
    Canvas canvas(page.width, page.height, page.density);
    draw_surround(canvas, frame);
    return canvas;
}

// As in the tables, with the sign for micro.
std::string shown(double value, Kind kind) {
    std::string text = show_quantity(value, kind);
    if (const std::size_t at = text.find(" u"); at != std::string::npos) text.replace(at, 2, " µ");
    return text;
}

bool has_part(const ExposureCase& each) { return each.mechanism == Mechanism::retinal_thermal; }

std::string sides_in_words(const Vec2& size) {
    return fmt::format("{:.3g} × {:.3g} mrad", size.x() * 1e3, size.y() * 1e3);
}

std::string ratio_in_words(const ExposureCase& each) { return fmt::format("AE/AEL {:.3g}", each.ratio()); }

std::string direction_in_words(const Vec3& eye) {
    const double right = degrees(std::atan2(-eye.y(), eye.x())),
                 up = degrees(std::atan2(eye.z(), std::hypot(eye.x(), eye.y())));
    std::string text;
    if (std::abs(right) >= 0.05)
        text += fmt::format(", {:.1f}° {}", std::abs(right), right > 0 ? "right" : "left");
    if (std::abs(up) >= 0.05) text += fmt::format(", {:.1f}° {}", std::abs(up), up > 0 ? "up" : "down");
    return text.empty() ? ", on the axis" : text;
}

std::string focus_in_words(double focus) {
    return std::isfinite(focus) ? "focused at " + shown(focus, Kind::length) : "focused at infinity";
}

// Place, focus, condition and criterion of a case.
std::string case_in_words(const ExposureCase& each) {
    std::string text = fmt::format("{}, eye {} from the chip{}", name_of(each.condition),
                                   shown(each.eye.norm(), Kind::length), direction_in_words(each.eye));
    text += has_part(each) ? ", " + focus_in_words(each.focus)
                           : fmt::format("; {} limit", name_of(each.mechanism));
    return text + fmt::format("; criterion {}, {}", name_of(each.criterion), ratio_in_words(each));
}

// The prefix under which the largest value reads best, and what to multiply values with.
struct Scaled {
    double factor = 1;
    std::string prefix;
};

Scaled scaled_for(double largest) {
    constexpr std::array prefixes{"", "m", "µ", "n", "p", "f"};
    Scaled scaled;
    for (std::size_t i = 1; i < prefixes.size() && largest * scaled.factor < 1; ++i)
        scaled = {scaled.factor * 1e3, prefixes[i]};
    return scaled;
}

std::string duration_mark(const ExposureCase& each) {
    const std::string duration = shown(each.duration, Kind::time);
    if (each.criterion != PulseCriterion::train)
        return fmt::format("{} in {}", ratio_in_words(each), duration);
    return fmt::format("AE/(C5 AEL) {:.3g} in {}, N = {:.0f}, C5 = {:.3g}", each.ratio(), duration,
                       each.pulses, each.C5);
}

// Where no limit is drawn, and why; ends the sentence.
std::string left_out_in_words(const EmissionCurve& curve, bool part) {
    const auto drawn = [](double limit) { return !std::isnan(limit); };
    const auto first = std::ranges::find_if(curve.limit, drawn) - curve.limit.begin();
    const auto last =
        std::find_if(curve.limit.rbegin(), curve.limit.rend(), drawn).base() - curve.limit.begin() - 1;
    if (first == 0 && last + 1 == std::ssize(curve.limit)) return ".";
    if (part)
        return fmt::format("; AEL is left out below {}, where alpha_max is shorter than the part.",
                           shown(curve.allowed_from, Kind::time));
    return fmt::format("; AEL is drawn from {} to {}, where this limit and this aperture count.",
                       shown(curve.durations[first], Kind::time), shown(curve.durations[last], Kind::time));
}

// The cells whose value is at least a level.
std::vector<std::size_t> cells_from(const std::vector<double>& values, double level) {
    std::vector<std::size_t> cells;
    for (std::size_t i = 0; i < values.size(); ++i)
        if (values[i] >= level) cells.push_back(i);
    return cells;
}

// Share of the limit that may be used, when the limit is that of Class 1 and a margin is asked for.
std::optional<double> asked_share(const SafetyVerdict& verdict) {
    if (verdict.asked != LaserClass::class_1 || verdict.asked_margin <= 0) return std::nullopt;
    return 1 - verdict.asked_margin;
}

}  // namespace

Canvas retinal_image_picture(const Design& design, const SafetyVerdict& verdict) {
    const std::optional<GoverningCase> governing = governing_case(verdict, design.eye_safety.time_base);
    if (!governing) return words_only(design, "Retinal image of the governing case");
    const ExposureCase& worst = verdict.criteria.front();
    const GoverningImage image = governing_image(verdict.light, *governing);
    const bool part = has_part(worst);
    const std::string what =
        part ? "Retinal image of the governing case" : "Light through the aperture in the governing case";
    HeatMap map{.rows = image.rows, .columns = image.columns, .values = image.density};
    map.heading = {.title = title_of(design, what),
                   .subtitle = fmt::format("{}. Each zone once: {} pass the aperture", case_in_words(worst),
                                           shown(image.entering, Kind::energy)),
                   .note = picture_note};
    if (image.shown < 0.999 * image.entering)
        map.heading.subtitle += fmt::format(", {} of it in view", shown(image.shown, Kind::energy));
    map.heading.subtitle +=
        part ? fmt::format("; the part is lit by {}.", counted(static_cast<long>(worst.zones.size()), "zone"))
             : "; all of it counts.";
    constexpr double per_square_milliradian = 1e-6;
    const Scaled scaled = scaled_for(*std::ranges::max_element(image.density) * per_square_milliradian);
    for (double& value : map.values) value *= per_square_milliradian * scaled.factor;
    map.horizontal = {.label = "Right of the line of sight",
                      .unit = "mrad",
                      .range = {image.low.x() * 1e3, image.high.x() * 1e3}};
    map.vertical = {.label = "Up from the line of sight",
                    .unit = "mrad",
                    .range = {image.low.y() * 1e3, image.high.y() * 1e3}};
    map.colours = {.label = "Energy of a shot",
                   .unit = scaled.prefix + "J/mrad²",
                   .range = AxisRange{0, *std::ranges::max_element(map.values)}};
    if (part)
        map.marks.push_back(
            {worst.part_low * 1e3, worst.part_high * 1e3, sides_in_words(worst.part_high - worst.part_low)});
    map.equal_units = true;
    return draw(map);
}

Canvas emission_limits_picture(const Design& design, const SafetyVerdict& verdict) {
    const std::string what = "Emission and limit over time";
    const std::optional<GoverningCase> governing = governing_case(verdict, design.eye_safety.time_base);
    if (!governing) return words_only(design, what);
    const ExposureCase& worst = verdict.criteria.front();
    const EmissionCurve data = emission_curve(verdict.light, *governing);
    LinePlot plot;
    plot.heading = {
        .title = title_of(design, what), .subtitle = case_in_words(worst) + ". ", .note = picture_note};
    plot.heading.subtitle +=
        has_part(worst) ? fmt::format("AE is the most that starts within a duration in the part of {}",
                                      sides_in_words(worst.part_high - worst.part_low))
                        : "AE is the most that starts within a duration, all light through the aperture";
    plot.heading.subtitle += left_out_in_words(data, has_part(worst));
    Curve emission{.name = "AE", .colour = palette::categories[0]},
        limit{.name = "AEL, Class 1", .colour = palette::categories[1]};
    Curve asked{.name = "", .colour = palette::quiet_ink, .dashed = true};
    const std::optional<double> share = asked_share(verdict);
    if (share) asked.name = fmt::format("AEL less {:.3g} %", 100 * verdict.asked_margin);
    for (std::size_t i = 0; i < data.durations.size(); ++i) {
        emission.points.emplace_back(data.durations[i], data.emission[i]);
        limit.points.emplace_back(data.durations[i], data.limit[i]);
        asked.points.emplace_back(data.durations[i], data.limit[i] * share.value_or(1));
    }
    plot.curves = {emission, limit};
    if (share) plot.curves.push_back(asked);
    plot.curves.push_back({.name = "",
                           .points = {{worst.duration, worst.ae}, {worst.duration, worst.ael}},
                           .colour = palette::ink,
                           .markers = true});
    plot.references.push_back(
        {.across = ReferenceLine::Across::vertical, .value = worst.duration, .name = duration_mark(worst)});
    plot.horizontal = {.label = "Duration of the emission", .unit = "s", .spacing = Spacing::logarithmic};
    plot.vertical = {.label = "Energy", .unit = "J", .spacing = Spacing::logarithmic};
    return draw(plot);
}

Canvas safety_map_picture(const Design& design, const SafetyVerdict& verdict) {
    const std::string what = "Eye safety over the field";
    const std::optional<GoverningCase> governing = governing_case(verdict, design.eye_safety.time_base);
    if (!governing) return words_only(design, what);
    const ExposureCase& worst = verdict.criteria.front();
    const SafetyMap data = safety_map(verdict.light, *governing);
    const bool part = has_part(worst);
    HeatMap map{.rows = data.rows, .columns = data.columns, .values = data.ratios};
    map.heading = {.title = title_of(design, what),
                   .subtitle = fmt::format(
                       "{}, every eye {} from the chip{}. Largest AE/AEL of all criteria; the ring marks the "
                       "governing place.",
                       name_of(worst.condition), shown(data.distance, Kind::length),
                       part ? " and " + focus_in_words(worst.focus) + ", as in the governing case" : ""),
                   .note = picture_note};
    const Vec2 low = data.low * (180 / pi), high = data.high * (180 / pi), at = data.governing * (180 / pi);
    map.horizontal = {.label = "Horizontal angle", .unit = "°", .range = {low.x(), high.x()}};
    map.vertical = {.label = "Vertical angle", .unit = "°", .range = {low.y(), high.y()}};
    map.colours = {.label = "AE/AEL of Class 1",
                   .unit = "",
                   .range = AxisRange{0, *std::ranges::max_element(data.ratios)}};
    if (const std::optional<double> share = asked_share(verdict))
        if (std::vector<std::size_t> cells = cells_from(data.ratios, *share); !cells.empty())
            map.groups.push_back({.cells = std::move(cells),
                                  .name = fmt::format("{:.3g} and more: the asked margin is used up", *share),
                                  .colour = palette::categories[1]});
    if (std::vector<std::size_t> cells = cells_from(data.ratios, 1); !cells.empty())
        map.groups.push_back({.cells = std::move(cells), .name = "1 and more: beyond the limit"});
    map.marks.push_back({at, at, fmt::format("{:.3g}", worst.ratio())});
    map.equal_units = true;
    return draw(map);
}

}  // namespace glint
