// Pictures of the chip: how warm its emitters are, and when its zones fire.
#include "report/hull.h"

#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/quantity.h>
#include <glint/core/text.h>
#include <glint/emitter/layout.h>
#include <glint/report/chip_pictures.h>
#include <glint/report/frame.h>

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <cmath>

namespace glint {
namespace {

constexpr const char* picture_note = "Modelled for early design from nominal data; not measured.";

std::string title_of(const std::string& name, const std::string& what) {
    return name.empty() ? what : what + ", " + name;
}

// ---- temperatures

void require_temperatures(const EmitterArray& array, std::span<const double> temperature) {
    const auto finite = [](double t) { return std::isfinite(t); };
    if (array.size() == 0 || temperature.size() != array.size() || !std::ranges::all_of(temperature, finite))
        throw Error(Problem{.what = fmt::format("a map of {} was given {}",
                                                counted(static_cast<long>(array.size()), "emitter"),
                                                counted(static_cast<long>(temperature.size()), "temperature")),
                            .accepted = "a finite temperature for each emitter and at least one emitter"});
}

// The chip in the unit that suits it.
struct ChipView {
    double scale = 1;           // units a metre
    double spacing = 0;         // of neighbours [units]
    Axis horizontal, vertical;  // with a margin around the emitters
};

ChipView view_of(const EmitterArray& array) {
    Vec2 low = array.positions.front(), high = low;
    for (const Vec2& p : array.positions) low = low.cwiseMin(p), high = high.cwiseMax(p);
    const double nearest = nearest_distance(array.positions);
    const double longest = (high - low).maxCoeff(), alone = longest > 0 ? longest : 20e-6;
    const double rim = std::max(0.05 * alone, 0.8 * nearest);
    const double word = std::max(0.09 * alone, 0.8 * nearest);  // room over the chip for the word on it
    const bool millimetres = longest >= 1e-3;
    ChipView view{.scale = millimetres ? 1e3 : 1e6, .spacing = 0, .horizontal = {}, .vertical = {}};
    view.spacing = (nearest > 0 ? nearest : alone) * view.scale;
    const std::string unit = millimetres ? "mm" : "µm";
    view.horizontal = {.label = "Horizontal place",
                       .unit = unit,
                       .range = {(low.x() - rim) * view.scale, (high.x() + rim) * view.scale}};
    view.vertical = {.label = "Vertical place",
                     .unit = unit,
                     .range = {(low.y() - rim) * view.scale, (high.y() + word) * view.scale}};
    return view;
}

bool inside(const std::vector<Vec2>& convex, const Vec2& point) {
    bool left = true, right = true;
    for (std::size_t i = 0; i < convex.size(); ++i) {
        const Vec2 edge = convex[(i + 1) % convex.size()] - convex[i], way = point - convex[i];
        const double turn = edge.x() * way.y() - edge.y() * way.x();
        left = left && turn >= 0, right = right && turn <= 0;
    }
    return left || right;
}

// Outlines a zone: neighbours together, or each emitter when others lie between them. Returns what it covers.
PageBox outline_zone(Canvas& canvas, const EmitterArray& array, const std::vector<Vec2>& places, int zone,
                     double radius) {
    std::vector<Vec2> corners, members;
    PageBox box{1e300, 1e300, -1e300, -1e300};
    for (std::size_t i = 0; i < places.size(); ++i) {
        if (array.zone_of[i] != zone) continue;
        const PageBox around = PageBox{places[i].x(), places[i].y(), places[i].x(), places[i].y()}.grown(radius);
        box = {std::min(box.left, around.left), std::min(box.top, around.top),
               std::max(box.right, around.right), std::max(box.bottom, around.bottom)};
        members.push_back(places[i]);
        for (const Vec2& corner : around.corners()) corners.push_back(corner);
    }
    const std::vector<Vec2> hull = convex_hull_of(std::move(corners));
    bool together = true;
    for (std::size_t i = 0; i < places.size() && together; ++i)
        together = array.zone_of[i] == zone || !inside(hull, places[i]);
    // A light rim keeps the line visible on emitters of any colour.
    for (const Pen& pen : {Pen{.colour = with_alpha(palette::background, 0.9), .width = 4.4, .dashes = {}},
                           Pen{.colour = palette::ink, .width = 1.8, .dashes = {}}}) {
        if (together)
            canvas.polyline(hull, pen, true);
        else
            for (const Vec2& member : members) canvas.circle(member, radius, pen);
    }
    return box;
}

// Writes a word over a box, or under it without room there.
void label_box(Canvas& canvas, const PageBox& plot, const PageBox& box, const std::string& word) {
    const TextStyle style{.size = 12.5, .weight = Weight::semibold, .align = Align::centre};
    const FontHeights heights = font_heights(style.size);
    constexpr double gap = 5;
    const double half = text_width(word, style.size, style.weight) / 2 + gap;
    // On a chip narrower than the word it runs over both sides.
    const double left = plot.left + half, right = std::max(left, plot.right - half);
    const double over = box.top - heights.descent - gap, under = box.bottom + heights.ascent + gap;
    const Vec2 at{std::clamp(box.centre().x(), left, right),
                  over - heights.ascent > plot.top + 2
                      ? over
                      : std::min(under, plot.bottom - heights.descent - gap)};
    canvas.fill_box(text_box(at, word, style).grown(2), with_alpha(palette::background, 0.9));
    canvas.text(at, word, style);
}

// ---- times

// The unit in which times up to `longest` read best.
struct TimeUnit {
    double scale = 1;  // units a second
    std::string symbol = "s";
};

TimeUnit unit_for(double longest) {
    if (longest >= 1) return {1, "s"};
    if (longest >= 1e-3) return {1e3, "ms"};
    return longest >= 1e-6 ? TimeUnit{1e6, "µs"} : TimeUnit{1e9, "ns"};
}

// As in the tables, with the sign for micro.
std::string shown_time(double value) {
    std::string text = show_quantity(value, Kind::time);
    if (const std::size_t at = text.find(" u"); at != std::string::npos) text.replace(at, 2, " µ");
    return text;
}

constexpr Colour first_dwell_colour = palette::categories[1], other_dwell_colour = palette::categories[2];
constexpr Colour gap_colour = rgb8(214, 218, 224);

// A bar on whole pixels, at least one each way.
void draw_bar(Canvas& canvas, const Frame& frame, const Vec2& low, const Vec2& high, const Colour& colour) {
    const Vec2 a = frame.place(low) * canvas.density(), b = frame.place(high) * canvas.density();
    const double left = std::floor(std::min(a.x(), b.x())), top = std::floor(std::min(a.y(), b.y()));
    const double right = std::max(left + 1, std::round(std::max(a.x(), b.x()))),
                 bottom = std::max(top + 1, std::round(std::max(a.y(), b.y())));
    canvas.fill_box({left / canvas.density(), top / canvas.density(), right / canvas.density(),
                     bottom / canvas.density()},
                    colour);
}

std::string zones_in_words(const FiringPlan& plan, int dwell) {
    const std::span<const int> zones = plan.zones_of(dwell);
    return zones.size() == 1 ? fmt::format("zone {}", zones.front())
                             : counted(static_cast<long>(zones.size()), "zone");
}

// The part of the first dwell that is shown close up; times from its first shot [s].
struct CloseUp {
    int first_shot = 0;
    double gap = 0;   // after the dwell, before the next
    double next = 0;  // first shot of the next dwell
    double from = 0, to = 0;
    bool next_is_seen = false;
};

CloseUp close_up(const FiringPlan& plan) {
    constexpr int most_shots = 150;  // five units each across the page: more would run together
    const double length = plan.dwell_length();
    CloseUp part;
    part.next = plan.dwells() > 1 ? plan.start[1] - plan.start[0] : plan.frame_period;
    part.gap = part.next - length;
    if (part.gap < 1e-9 * length) part.gap = 0;  // rounding of the times
    part.first_shot = std::max(0, plan.shots - most_shots);
    part.from = part.first_shot * plan.shot_period;
    const double seen = length - part.from;
    // A gap that would leave the shots no room is cut.
    part.next_is_seen = part.gap <= seen;
    part.to = part.next_is_seen ? part.next + std::max(0.1 * seen, 1.3 * plan.shot_period) : length + 0.4 * seen;
    part.from -= 0.02 * seen;
    return part;
}

FrameContent frame_content(const std::string& name, const FiringPlan& plan) {
    const double zones = static_cast<double>(plan.zones.size());
    const CloseUp part = close_up(plan);
    FrameContent content;
    content.heading = {.title = title_of(name, "Firing times of one frame"),
                       .subtitle = fmt::format(
                           "{}, {} at once; {} of {}", counted(static_cast<long>(plan.zones.size()), "zone"),
                           plan.zones_at_once, counted(plan.dwells(), "dwell"), shown_time(plan.dwell_length()))};
    if (plan.dwells() > 1)
        content.heading.subtitle +=
            part.gap > 0 ? fmt::format(" with gaps of {}", shown_time(part.gap)) : " without gaps";
    content.heading.subtitle += fmt::format(" in a frame of {}", shown_time(plan.frame_period));
    const TimeUnit unit = unit_for(plan.frame_period);
    content.horizontal = {
        .label = "Time in the frame", .unit = unit.symbol, .range = {0, plan.frame_period * unit.scale}};
    content.vertical = {.label = "Zone", .unit = "", .range = {zones - 0.25, -0.75}};
    content.legend.push_back({.name = "First dwell, shown below",
                              .colour = first_dwell_colour,
                              .sign = LegendEntry::Sign::box});
    if (plan.dwells() > 1)
        content.legend.push_back(
            {.name = "Other dwells", .colour = other_dwell_colour, .sign = LegendEntry::Sign::box});
    return content;
}

void draw_frame_of_dwells(Canvas& canvas, const Frame& frame, const FiringPlan& plan) {
    const double scale = unit_for(plan.frame_period).scale;
    canvas.clip(frame.plot);
    draw_ground(canvas, frame);
    // The first dwell comes last: no other may hide it where bars share a pixel.
    for (int dwell = plan.dwells() - 1; dwell >= 0; --dwell)
        for (const int zone : plan.zones_of(dwell))
            draw_bar(canvas, frame, {plan.start[dwell] * scale, zone - 0.4},
                     {(plan.start[dwell] + plan.dwell_length()) * scale, zone + 0.4},
                     dwell == 0 ? first_dwell_colour : other_dwell_colour);
    canvas.clip(std::nullopt);
    draw_surround(canvas, frame);
}

FrameContent dwell_content(const FiringPlan& plan) {
    const CloseUp part = close_up(plan);
    FrameContent content;
    content.heading = {.title = "",
                       .subtitle = fmt::format("First dwell: {}, {} of {}", zones_in_words(plan, 0),
                                               counted(plan.shots, "shot"), shown_time(plan.pulse_width)),
                       .note = picture_note};
    if (plan.shots > 1) content.heading.subtitle += ", one every " + shown_time(plan.shot_period);
    if (part.first_shot > 0)
        content.heading.subtitle += fmt::format("; the last {} shots", plan.shots - part.first_shot);
    const TimeUnit unit = unit_for(part.to);
    content.horizontal = {.label = "Time from the first shot of the dwell",
                          .unit = unit.symbol,
                          .range = {part.from * unit.scale, part.to * unit.scale}};
    content.vertical = {.label = "Power over peak", .unit = "", .range = {0, 1.2}};
    const std::string next = plan.dwells() > 1 ? "next dwell" : "next frame";
    content.legend.push_back(
        {.name = "Shots", .colour = first_dwell_colour, .sign = LegendEntry::Sign::box});
    if (part.gap > 0)
        content.legend.push_back(
            {.name = fmt::format("Gap of {} to the {}{}", shown_time(part.gap), next,
                                 part.next_is_seen ? "" : ", not shown to its end"),
             .colour = gap_colour,
             .sign = LegendEntry::Sign::box});
    if (part.next_is_seen)
        content.legend.push_back(
            {.name = fmt::format("Shots of the {}: {}", next, zones_in_words(plan, plan.dwells() > 1 ? 1 : 0)),
             .colour = other_dwell_colour,
             .sign = LegendEntry::Sign::box});
    return content;
}

void draw_dwell(Canvas& canvas, const Frame& frame, const FiringPlan& plan) {
    const CloseUp part = close_up(plan);
    const double scale = unit_for(part.to).scale;
    canvas.clip(frame.plot);
    draw_ground(canvas, frame);
    const double top = frame.content.vertical->range.high;
    if (part.gap > 0)
        draw_bar(canvas, frame, {plan.dwell_length() * scale, 0}, {part.next * scale, top}, gap_colour);
    const auto shot = [&](double time, const Colour& colour) {
        draw_bar(canvas, frame, {time * scale, 0}, {(time + plan.pulse_width) * scale, 1}, colour);
    };
    for (int k = part.first_shot; k < plan.shots; ++k) shot(k * plan.shot_period, first_dwell_colour);
    for (int k = 0; k < plan.shots && part.next + k * plan.shot_period < part.to; ++k)
        shot(part.next + k * plan.shot_period, other_dwell_colour);
    canvas.clip(std::nullopt);
    draw_surround(canvas, frame);
}

}  // namespace

Canvas junction_map_picture(const std::string& name, const EmitterArray& array,
                            std::span<const double> temperature) {
    require_temperatures(array, temperature);
    std::vector<double> celsius(temperature.begin(), temperature.end());
    for (double& t : celsius) t -= zero_celsius;
    const auto [coolest, hottest] = std::ranges::minmax_element(celsius);
    const int zone = array.zone_of[std::ranges::max_element(celsius) - celsius.begin()];
    const ChipView view = view_of(array);
    FrameContent content{.heading = {.title = title_of(name, "Junction temperatures"), .note = picture_note},
                         .horizontal = view.horizontal,
                         .vertical = view.vertical,
                         .aspect = 1};
    content.heading.subtitle = fmt::format(
        "{} in {}, {:.1f} to {:.1f} °C; the chip seen from behind the module. Dots are not the size of "
        "apertures.",
        counted(static_cast<long>(array.size()), "emitter"), counted(array.zones, "zone"), *coolest, *hottest);
    content.colours = settle({.label = "Junction temperature", .unit = "°C", .range = {}}, celsius);
    const auto [page, frame] = fit_page({}, content);
    Canvas canvas(page.width, page.height, page.density);
    canvas.clip(frame.plot);
    draw_ground(canvas, frame);
    const double spacing = (frame.place({view.spacing, 0}) - frame.place({0, 0})).x();
    const double radius = std::max(0.4 * spacing, 0.5 / canvas.density());
    std::vector<Vec2> places;
    for (const Vec2& p : array.positions) places.push_back(frame.place(p * view.scale));
    for (std::size_t i = 0; i < places.size(); ++i)
        canvas.fill_disc(places[i], radius, content.colours->of(celsius[i]));
    const PageBox box = outline_zone(canvas, array, places, zone, radius + std::min(2.0, 0.1 * spacing));
    label_box(canvas, frame.plot, box.grown(2), fmt::format("zone {}: {:.1f} °C", zone, *hottest));
    canvas.clip(std::nullopt);
    draw_surround(canvas, frame);
    return canvas;
}

Canvas firing_times_picture(const std::string& name, const FiringPlan& plan) {
    if (plan.zones.empty() || plan.start.empty())
        throw Error(Problem{.what = "a firing plan without a dwell has no times to show",
                            .accepted = "at least one zone"});
    constexpr double width = 900, below = 215, density = 2, highest_row = 36;
    double above = 445;
    const FrameContent dwells = frame_content(name, plan);
    Frame upper = lay_out({0, 0, width, above}, dwells);
    // Few zones need less height; rows this low also keep the axis from marking halves of a zone.
    const double spare = upper.plot.height() - highest_row * (static_cast<double>(plan.zones.size()) + 0.5);
    if (spare > 0) above -= std::floor(spare), upper = lay_out({0, 0, width, above}, dwells);
    const Frame lower = lay_out({0, above, width, above + below}, dwell_content(plan));
    Canvas canvas(width, above + below, density);
    draw_frame_of_dwells(canvas, upper, plan);
    draw_dwell(canvas, lower, plan);
    return canvas;
}

}  // namespace glint
