// Pictures of the chip: how warm its emitters are, and when its zones fire.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/quantity.h>
#include <glint/core/text.h>
#include <glint/emitter/layout.h>
#include <glint/report/chip_pictures.h>
#include <glint/report/frame.h>

#include <fmt/format.h>
#include <algorithm>
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
        throw Error(Problem{
            .what =
                fmt::format("a map of {} was given {}", counted(static_cast<long>(array.size()), "emitter"),
                            counted(static_cast<long>(temperature.size()), "temperature")),
            .accepted = "a finite temperature for each emitter and at least one emitter"});
}

// The chip in the unit that suits it.
struct ChipView {
    double scale = 1;    // units a metre
    double spacing = 0;  // of the nearest two emitters [units]
    double typical = 0;  // side of the square that an emitter has on average; `spacing` if that is more
    Axis horizontal, vertical;  // with room around the emitters
};

ChipView view_of(const EmitterArray& array) {
    Vec2 low = array.positions.front(), high = low;
    for (const Vec2& p : array.positions) low = low.cwiseMin(p), high = high.cwiseMax(p);
    const bool lone = array.size() == 1;  // any size will do
    const double nearest = lone ? 20e-6 : nearest_distance(array.positions);
    const double longest = lone ? 240e-6 : (high - low).maxCoeff();
    const double cell = std::sqrt((high - low).prod() / static_cast<double>(array.size()));
    const double typical = std::clamp(cell, nearest, 3 * nearest);
    // Room for the outline, and above for the word on it; a narrow chip gets a quarter of its length.
    const Vec2 middle = (low + high) / 2, least = Vec2::Constant(longest / 8);
    const double rim = std::max(0.05 * longest, 1.5 * typical);
    low -= Vec2::Constant(rim);
    high += Vec2(rim, 0.07 * longest + 1.3 * typical);
    low = low.cwiseMin(middle - least), high = high.cwiseMax(middle + least);
    const bool millimetres = longest >= 1e-3;
    const double scale = millimetres ? 1e3 : 1e6;
    const std::string unit = millimetres ? "mm" : "µm";
    return {
        .scale = scale,
        .spacing = nearest * scale,
        .typical = typical * scale,
        .horizontal = {.label = "Horizontal place",
                       .unit = unit,
                       .range = {low.x() * scale, high.x() * scale}},
        .vertical = {.label = "Vertical place", .unit = unit, .range = {low.y() * scale, high.y() * scale}}};
}

// Outlines a zone: half way to the emitters of other zones, and `reach` around it where there are none.
// Returns what it may cover.
PageBox outline_zone(Canvas& canvas, const EmitterArray& array, const std::vector<Vec2>& places, int zone,
                     double spacing, double reach) {
    constexpr double half_line = 0.9;
    // A light rim keeps the line visible on emitters of any colour; where they are small it would hide them.
    const double half_rim = half_line + std::min(1.3, 0.05 * spacing), seen = reach + half_rim + 1;
    PageBox box{1e300, 1e300, -1e300, -1e300};
    for (std::size_t i = 0; i < places.size(); ++i)
        if (array.zone_of[i] == zone)
            box = {std::min(box.left, places[i].x()), std::min(box.top, places[i].y()),
                   std::max(box.right, places[i].x()), std::max(box.bottom, places[i].y())};
    // The nearest emitters around each pixel, of the zone and of others; -1: none is near.
    struct Nearest {
        int own = -1, other = -1;
    };
    const double density = canvas.density();
    const auto first_pixel = [&](double at) { return static_cast<int>(std::floor((at - seen) * density)); };
    const int left = first_pixel(box.left), top = first_pixel(box.top);
    const int columns = static_cast<int>((box.width() + 2 * seen) * density) + 2,
              rows = static_cast<int>((box.height() + 2 * seen) * density) + 2;
    std::vector<Nearest> nearest(static_cast<std::size_t>(columns) * rows);
    const auto pixel_middle = [&](int row, int column) {
        return Vec2((left + column + 0.5) / density, (top + row + 0.5) / density);
    };
    const int span = static_cast<int>(2 * seen * density) + 2;
    for (std::size_t i = 0; i < places.size(); ++i) {
        const int from_column = first_pixel(places[i].x()) - left,
                  from_row = first_pixel(places[i].y()) - top;
        for (int row = std::max(0, from_row); row < std::min(rows, from_row + span); ++row)
            for (int column = std::max(0, from_column); column < std::min(columns, from_column + span);
                 ++column) {
                Nearest& here = nearest[static_cast<std::size_t>(row) * columns + column];
                int& held = array.zone_of[i] == zone ? here.own : here.other;
                const Vec2 at = pixel_middle(row, column);
                if (held < 0 || (places[i] - at).squaredNorm() < (places[held] - at).squaredNorm())
                    held = static_cast<int>(i);
            }
    }
    for (int row = 0; row < rows; ++row)
        for (int column = 0; column < columns; ++column) {
            const Nearest& here = nearest[static_cast<std::size_t>(row) * columns + column];
            if (here.own < 0) continue;
            const Vec2 own = places[here.own] - pixel_middle(row, column);
            double inward = reach - own.norm();  // distance from the line
            if (here.other >= 0) {
                const Vec2 other = places[here.other] - pixel_middle(row, column);
                // From the line half way between the two; farther off, others may lie between them.
                const double farther = std::abs(other.norm() - own.norm()) - spacing / 2;
                const double half_way =
                    (other.squaredNorm() - own.squaredNorm()) / (2 * (other - own).norm());
                inward = std::min(inward, std::copysign(std::max(std::abs(half_way), farther), half_way));
            }
            const auto covered = [&](double half) {
                return std::clamp((half - std::abs(inward)) * density + 0.5, 0.0, 1.0);
            };
            canvas.pixel(left + column, top + row, palette::background, 0.9 * covered(half_rim));
            canvas.pixel(left + column, top + row, palette::ink, covered(half_line));
        }
    return box.grown(reach);
}

// Writes a word over a box, or under it without room there.
void label_box(Canvas& canvas, const PageBox& plot, const PageBox& box, const std::string& word) {
    const TextStyle style{.size = 12.5, .weight = Weight::semibold, .align = Align::centre};
    const FontHeights heights = font_heights(style.size);
    constexpr double gap = 5;
    const double half = text_width(word, style.size, style.weight) / 2 + gap;
    const double middle = plot.centre().x(), room = std::max(0.0, plot.width() / 2 - half);
    const double over = box.top - heights.descent - gap, under = box.bottom + heights.ascent + gap;
    const Vec2 at{
        std::clamp(box.centre().x(), middle - room, middle + room),
        over - heights.ascent > plot.top + 2 ? over : std::min(under, plot.bottom - heights.descent - gap)};
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

// A bar on whole pixels, at least `least` units each way.
void draw_bar(Canvas& canvas, const Frame& frame, const Vec2& low, const Vec2& high, const Colour& colour,
              double least = 1) {
    const Vec2 a = frame.place(low), b = frame.place(high);
    const auto whole = [&](double at) { return std::round(at * canvas.density()) / canvas.density(); };
    const double left = whole(std::min(a.x(), b.x())), top = whole(std::min(a.y(), b.y()));
    canvas.fill_box({left, top, std::max(left + least, whole(std::max(a.x(), b.x()))),
                     std::max(top + least, whole(std::max(a.y(), b.y())))},
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
    constexpr int most_shots = 200;  // four units each across the page: more would run together
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
    part.to =
        part.next_is_seen ? part.next + std::max(0.1 * seen, 1.3 * plan.shot_period) : length + 0.4 * seen;
    part.from -= 0.02 * seen;
    return part;
}

FrameContent frame_content(const std::string& name, const FiringPlan& plan) {
    const double zones = static_cast<double>(plan.zones.size());
    const CloseUp part = close_up(plan);
    FrameContent content;
    content.heading = {
        .title = title_of(name, "Firing times of one frame"),
        .subtitle = fmt::format("{}, {} at once; {} of {}",
                                counted(static_cast<long>(plan.zones.size()), "zone"), plan.zones_at_once,
                                counted(plan.dwells(), "dwell"), shown_time(plan.dwell_length()))};
    if (plan.dwells() > 1)
        content.heading.subtitle +=
            part.gap > 0 ? fmt::format(" with gaps of {}", shown_time(part.gap)) : " without gaps";
    content.heading.subtitle += fmt::format(" in a frame of {}", shown_time(plan.frame_period));
    const TimeUnit unit = unit_for(plan.frame_period);
    content.horizontal = {
        .label = "Time in the frame", .unit = unit.symbol, .range = {0, plan.frame_period * unit.scale}};
    content.vertical = {.label = "Zone", .unit = "", .range = {zones - 0.25, -0.75}};
    content.legend.push_back(
        {.name = "First dwell, shown below", .colour = first_dwell_colour, .sign = LegendEntry::Sign::box});
    if (plan.dwells() > 1)
        content.legend.push_back(
            {.name = "Other dwells", .colour = other_dwell_colour, .sign = LegendEntry::Sign::box});
    return content;
}

void draw_frame_of_dwells(Canvas& canvas, const Frame& frame, const FiringPlan& plan) {
    const double scale = unit_for(plan.frame_period).scale;
    canvas.clip(frame.plot);
    draw_ground(canvas, frame);
    // The first dwell comes last and larger: among thousands it would not be found.
    for (int dwell = plan.dwells() - 1; dwell >= 0; --dwell)
        for (const int zone : plan.zones_of(dwell))
            draw_bar(canvas, frame, {plan.start[dwell] * scale, zone - 0.4},
                     {(plan.start[dwell] + plan.dwell_length()) * scale, zone + 0.4},
                     dwell == 0 ? first_dwell_colour : other_dwell_colour, dwell == 0 ? 4 : 1);
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
        content.heading.subtitle += fmt::format("; its last {} are shown", plan.shots - part.first_shot);
    const TimeUnit unit = unit_for(part.to);
    content.horizontal = {.label = "Time from the first shot of the dwell",
                          .unit = unit.symbol,
                          .range = {part.from * unit.scale, part.to * unit.scale}};
    content.vertical = {.label = "Power/peak", .unit = "", .range = {0, 1.2}};
    const std::string next = plan.dwells() > 1 ? "next dwell" : "next frame";
    content.legend.push_back({.name = "Shots", .colour = first_dwell_colour, .sign = LegendEntry::Sign::box});
    if (part.gap > 0)
        content.legend.push_back({.name = fmt::format("Gap of {} to the {}{}", shown_time(part.gap), next,
                                                      part.next_is_seen ? "" : ", not shown to its end"),
                                  .colour = gap_colour,
                                  .sign = LegendEntry::Sign::box});
    if (part.next_is_seen)
        content.legend.push_back({.name = fmt::format("Shots of the {}: {}", next,
                                                      zones_in_words(plan, plan.dwells() > 1 ? 1 : 0)),
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
        "{} in {} at {:.1f} to {:.1f} °C; the chip seen from behind the module. Dots are not the size of "
        "apertures.",
        counted(static_cast<long>(array.size()), "emitter"), counted(array.zones, "zone"), *coolest,
        *hottest);
    content.colours = settle({.label = "Junction temperature", .unit = "°C", .range = {}}, celsius);
    const auto [page, frame] = fit_page({}, content);
    Canvas canvas(page.width, page.height, page.density);
    canvas.clip(frame.plot);
    draw_ground(canvas, frame);
    const double units = frame.plot.width() / (view.horizontal.range.high - view.horizontal.range.low);
    const double spacing = view.spacing * units;
    // Dots of a few pixels would be paled by the page between them: they touch.
    const double radius =
        std::max(spacing * canvas.density() < 3 ? 0.75 * spacing : 0.4 * spacing, 0.5 / canvas.density());
    std::vector<Vec2> places;
    for (const Vec2& p : array.positions) places.push_back(frame.place(p * view.scale));
    for (std::size_t i = 0; i < places.size(); ++i)
        canvas.fill_disc(places[i], radius, content.colours->of(celsius[i]));
    const PageBox box = outline_zone(canvas, array, places, zone, spacing, 1.25 * view.typical * units + 2);
    label_box(canvas, frame.plot, box, fmt::format("zone {}: {:.1f} °C", zone, *hottest));
    canvas.clip(std::nullopt);
    draw_surround(canvas, frame);
    return canvas;
}

Canvas firing_times_picture(const std::string& name, const FiringPlan& plan) {
    if (plan.zones.empty() || plan.start.empty())
        throw Error(Problem{.what = "a firing plan without a dwell has no times to show",
                            .accepted = "at least one zone"});
    constexpr double width = 900, below = 240, density = 2, highest_row = 36;
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
