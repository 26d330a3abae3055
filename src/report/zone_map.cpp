// Zones over a field of view as a picture.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/report/zone_map.h>

#include <algorithm>
#include <cmath>

namespace glint {

namespace {

void require_polygon(const std::vector<Vec2>& corners, const std::string& what) {
    if (corners.size() < 3)
        throw Error(Problem{.what = what + " has fewer than 3 corners", .accepted = "3 or more"});
    for (const Vec2& corner : corners)
        if (!corner.allFinite())
            throw Error(
                Problem{.what = what + " has a corner that is not finite", .accepted = "finite angles"});
}

/// Range of one coordinate of everything shown, with a margin of 4 %.
AxisRange fitted_range(const ZoneMap& map, int coordinate) {
    double low = 1e300, high = -1e300;
    const auto see = [&](const std::vector<Vec2>& corners) {
        for (const Vec2& corner : corners)
            low = std::min(low, corner[coordinate]), high = std::max(high, corner[coordinate]);
    };
    for (const ZoneShape& zone : map.zones)
        for (const std::vector<Vec2>& polygon : zone.polygons) see(polygon);
    for (const FieldOutline& outline : map.outlines) see(outline.corners);
    if (low > high) return {-1, 1};
    const double rim = high > low ? 0.04 * (high - low) : 1;
    return {low - rim, high + rim};
}

/// Centre of area of a polygon; the mean corner when it has no area.
Vec2 centroid(const std::vector<Vec2>& corners) {
    double area = 0;
    Vec2 moment = Vec2::Zero(), mean = Vec2::Zero();
    for (std::size_t i = 0; i < corners.size(); ++i) {
        const Vec2 a = corners[i] - corners[0], b = corners[(i + 1) % corners.size()] - corners[0];
        const double cross = a.x() * b.y() - a.y() * b.x();
        area += cross;
        moment += cross * (a + b) / 3;
        mean += corners[i] / static_cast<double>(corners.size());
    }
    return std::abs(area) > 1e-12 ? Vec2(corners[0] + moment / area) : mean;
}

bool inside(const std::vector<Vec2>& corners, const Vec2& point) {
    bool odd = false;
    for (std::size_t i = 0; i < corners.size(); ++i) {
        const Vec2 &a = corners[i], &b = corners[(i + 1) % corners.size()];
        if ((a.y() > point.y()) != (b.y() > point.y()) &&
            point.x() < a.x() + (point.y() - a.y()) / (b.y() - a.y()) * (b.x() - a.x()))
            odd = !odd;
    }
    return odd;
}

/// Largest text size, 12 down to 8, at which the number stands inside the polygon with a little air; 0: none.
double number_size(const std::vector<Vec2>& polygon, const Vec2& centre, const std::string& number) {
    for (double size = 12; size >= 8; size -= 1) {
        const double half_width = text_width(number, size) / 2 + 2,
                     half_height = font_heights(size).capital / 2 + 2;
        bool fits = true;
        for (const double x : {-half_width, half_width})
            for (const double y : {-half_height, half_height})
                fits = fits && inside(polygon, centre + Vec2{x, y});
        if (fits) return size;
    }
    return 0;
}

std::vector<std::vector<Vec2>> placed(const Frame& frame, const std::vector<std::vector<Vec2>>& polygons) {
    std::vector<std::vector<Vec2>> on_page = polygons;
    for (std::vector<Vec2>& polygon : on_page)
        for (Vec2& corner : polygon) corner = frame.place(corner);
    return on_page;
}

void draw_zones(Canvas& canvas, const ZoneMap& map, const Frame& frame) {
    const SettledScale& colours = *frame.content.colours;
    for (const ZoneShape& zone : map.zones)
        for (const std::vector<Vec2>& polygon : placed(frame, zone.polygons)) {
            if (std::isnan(zone.value))
                fill_hatch(canvas, {polygon});
            else
                canvas.fill_polygon(polygon, with_alpha(colours.of(zone.value), map.opacity));
            canvas.polyline(
                polygon, {.colour = with_alpha(palette::background, 0.9), .width = 0.8, .dashes = {}}, true);
        }
}

/// The lines over the zones, on a light rim so that they show on dark zones too.
void draw_outlines(Canvas& canvas, const ZoneMap& map, const Frame& frame) {
    for (const FieldOutline& outline : map.outlines) {
        const std::vector<Vec2> ring = placed(frame, {outline.corners})[0];
        canvas.polyline(ring, {.colour = with_alpha(palette::background, 0.75), .width = 4, .dashes = {}},
                        true);
        canvas.polyline(ring, {.colour = outline.colour, .width = 2, .cap = Cap::butt, .dashes = {6, 4}},
                        true);
    }
}

/// All numbers have one size: the smallest that any of those that fit needs.
void draw_numbers(Canvas& canvas, const ZoneMap& map, const Frame& frame) {
    const SettledScale& colours = *frame.content.colours;
    double size = 12;
    const auto each_number = [&](auto&& visit) {
        for (const ZoneShape& zone : map.zones)
            for (const std::vector<Vec2>& polygon : placed(frame, zone.polygons)) {
                const Vec2 centre = centroid(polygon);
                if (const double fitting =
                        zone.number.empty() ? 0 : number_size(polygon, centre, zone.number);
                    fitting > 0)
                    visit(zone, centre, fitting);
            }
    };
    each_number([&](const ZoneShape&, const Vec2&, double fitting) { size = std::min(size, fitting); });
    each_number([&](const ZoneShape& zone, const Vec2& centre, double) {
        const Colour ground = mix(palette::background, colours.of(zone.value), map.opacity);
        // A rim in the zone's colour parts the number from a line that runs under it.
        const TextStyle style{.size = size,
                              .colour = ink_on(ground),
                              .align = Align::centre,
                              .anchor = Anchor::middle,
                              .halo = map.outlines.empty() ? 0 : 2.5,
                              .halo_colour = ground};
        // Where zones overlap only the first number stands.
        const PageBox box = text_box(centre, zone.number, style);
        const auto hit = [&](const Label& label) { return label.box.overlaps(box); };
        if (frame.plot.holds(box) && std::none_of(canvas.labels().begin(), canvas.labels().end(), hit))
            canvas.text(centre, zone.number, style);
    });
}

}  // namespace

Canvas draw(const ZoneMap& map) {
    std::vector<double> values;
    bool missing = false;
    for (const ZoneShape& zone : map.zones) {
        values.push_back(zone.value);
        missing = missing || std::isnan(zone.value);
        for (const std::vector<Vec2>& polygon : zone.polygons) require_polygon(polygon, "a zone of the map");
    }
    FrameContent content{.heading = map.heading, .horizontal = map.horizontal, .vertical = map.vertical};
    content.aspect = 1;
    content.colours = settle(map.colours, values);
    for (const FieldOutline& outline : map.outlines) {
        require_polygon(outline.corners, "the outline '" + outline.name + "'");
        content.legend.push_back(
            {.name = outline.name, .colour = outline.colour, .sign = LegendEntry::Sign::dashed});
    }
    if (missing)
        content.legend.push_back(
            {.name = map.no_data, .colour = palette::no_data_line, .sign = LegendEntry::Sign::hatch});
    if (map.fit) {
        content.horizontal->range = fitted_range(map, 0);
        content.vertical->range = fitted_range(map, 1);
    }
    const auto [page, frame] = fit_page(map.size, content);
    Canvas canvas(page.width, page.height, page.density);
    canvas.clip(frame.plot);
    draw_ground(canvas, frame);
    draw_zones(canvas, map, frame);
    draw_outlines(canvas, map, frame);
    draw_numbers(canvas, map, frame);
    canvas.clip(std::nullopt);
    draw_surround(canvas, frame);
    return canvas;
}

std::vector<Vec2> ellipse(const Vec2& centre, const Vec2& half, double turn, int corners) {
    std::vector<Vec2> ring;
    const Vec2 across{std::cos(turn), std::sin(turn)}, up{-std::sin(turn), std::cos(turn)};
    for (int i = 0; i < corners; ++i) {
        const double angle = 2 * pi * i / corners;
        ring.push_back(centre + half.x() * std::cos(angle) * across + half.y() * std::sin(angle) * up);
    }
    return ring;
}

std::vector<Vec2> rectangle(const Vec2& centre, const Vec2& half) {
    return {{centre.x() - half.x(), centre.y() - half.y()},
            {centre.x() + half.x(), centre.y() - half.y()},
            {centre.x() + half.x(), centre.y() + half.y()},
            {centre.x() - half.x(), centre.y() + half.y()}};
}

}  // namespace glint
