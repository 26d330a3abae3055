// Pictures of one assessment.
#include <glint/core/constants.h>
#include <glint/core/text.h>
#include <glint/optics/receiver.h>
#include <glint/report/chip_pictures.h>
#include <glint/report/point_view.h>
#include <glint/report/previews.h>
#include <glint/report/safety_pictures.h>
#include <glint/report/zone_map.h>

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <cmath>

namespace glint {
namespace {

constexpr const char* picture_note = "Modelled for early design from nominal data; not measured.";

std::string title_of(const Design& design, const std::string& what) {
    return design.name.empty() ? what : what + ", " + design.name;
}

// Horizontal angle to the right and vertical angle up [deg].
Vec2 field_angles(const Vec3& direction) {
    return {degrees(std::atan2(-direction.y(), direction.x())),
            degrees(std::atan2(direction.z(), std::hypot(direction.x(), direction.y())))};
}

// Directions in which a beam's density on a flat screen is half its peak.
std::vector<Vec3> half_power_outline(const Beam& beam) {
    const double half_maximum = std::sqrt(std::log(2.0) / 2);
    const Vec3 up = beam.right.cross(beam.axis);
    std::vector<Vec2> tangents;
    constexpr int corners = 32;
    for (int i = 0; i < corners; ++i) {
        const double angle = 2 * pi * i / corners;
        const Vec2 round(std::cos(angle), std::sin(angle));
        switch (beam.kernel.shape) {
            case KernelShape::gaussian:
                tangents.push_back(round.cwiseProduct(half_maximum * Vec2(beam.kernel.a, beam.kernel.b)));
                break;
            case KernelShape::ring:
                tangents.push_back(round * (beam.kernel.a + half_maximum * beam.kernel.b));
                break;
            case KernelShape::round:
                tangents.push_back(round * beam.kernel.a);
                break;
            case KernelShape::rectangle:  // the circle pushed out onto the square
                tangents.push_back(
                    (round / round.cwiseAbs().maxCoeff()).cwiseProduct(Vec2(beam.kernel.a, beam.kernel.b)));
                break;
        }
    }
    std::vector<Vec3> outline;
    for (const Vec2& t : tangents) outline.push_back(beam.axis + t.x() * beam.right + t.y() * up);
    return outline;
}

// Smallest convex polygon around the points, counter-clockwise (Andrew 1979).
std::vector<Vec2> convex_hull(std::vector<Vec2> points) {
    std::ranges::sort(
        points, [](const Vec2& a, const Vec2& b) { return a.x() != b.x() ? a.x() < b.x() : a.y() < b.y(); });
    const auto left_turn = [](const Vec2& a, const Vec2& b, const Vec2& c) {
        return (b.x() - a.x()) * (c.y() - a.y()) - (b.y() - a.y()) * (c.x() - a.x()) > 0;
    };
    std::vector<Vec2> hull;
    const auto walk = [&](const auto& range) {
        const std::size_t base = hull.size();
        for (const Vec2& p : range) {
            while (hull.size() >= base + 2 && !left_turn(hull[hull.size() - 2], hull.back(), p))
                hull.pop_back();
            hull.push_back(p);
        }
        hull.pop_back();
    };
    walk(points);
    std::ranges::reverse(points);
    walk(points);
    return hull;
}

// Outline of the receiver's field, along its edges.
std::vector<Vec2> receiver_outline(const Receiver& receiver) {
    std::vector<Vec2> outline;
    constexpr int steps = 16;
    const int right = receiver.pixels.columns - 1, bottom = receiver.pixels.rows - 1;
    const auto edge = [&](Vec2 from, Vec2 to) {
        for (int i = 0; i < steps; ++i) {
            const Vec2 at = from + (to - from) * i / steps;
            const int column = std::min(static_cast<int>(at.x()), right),
                      row = std::min(static_cast<int>(at.y()), bottom);
            outline.push_back(
                field_angles(pixel_ray(receiver, column, row, at - Vec2(column, row)).direction));
        }
    };
    const double w = right + 1.0, h = bottom + 1.0;
    edge({0, 0}, {w, 0}), edge({w, 0}, {w, h}), edge({w, h}, {0, h}), edge({0, h}, {0, 0});
    return outline;
}

// One outline around neighbouring beams. It is drawn tight on a flat screen, where rows and columns behind a
// lens are straight, and then carried over to field angles, where they are curved.
std::vector<Vec2> zone_outline(std::span<const Beam* const> beams) {
    std::vector<Vec2> on_screen;
    for (const Beam* beam : beams)
        for (const Vec3& direction : half_power_outline(*beam))
            on_screen.emplace_back(-direction.y() / direction.x(), direction.z() / direction.x());
    const std::vector<Vec2> hull = convex_hull(std::move(on_screen));
    std::vector<Vec2> outline;
    for (std::size_t i = 0; i < hull.size(); ++i) {
        const Vec2 from = hull[i], way = hull[(i + 1) % hull.size()] - from;
        const int steps = 1 + static_cast<int>(way.norm() / 0.02);
        for (int k = 0; k < steps; ++k) {
            const Vec2 at = from + way * k / steps;
            outline.push_back(field_angles(Vec3(1, -at.x(), at.y())));
        }
    }
    return outline;
}

}  // namespace

std::span<const View> views() {
    static const std::array list{
        View{"points", "the points of one frame in space, coloured by range", points_picture},
        View{"zones", "the zones over the field, coloured by when they fire", zones_picture},
        View{"retinal-image", "what the eye sees in the case that governs eye safety",
             [](const Design& design, const Assessment& assessment) {
                 return retinal_image_picture(design, assessment.safety);
             }},
        View{"emission-limits", "emission and limit over time in that case",
             [](const Design& design, const Assessment& assessment) {
                 return emission_limits_picture(design, assessment.safety);
             }},
        View{"safety-map", "emission over limit, over the field",
             [](const Design& design, const Assessment& assessment) {
                 return safety_map_picture(design, assessment.safety);
             }},
        View{"firing-times", "which zone fires when, over one frame and one dwell",
             [](const Design& design, const Assessment& assessment) {
                 return firing_times_picture(design.name, assessment.plan);
             }},
        View{"junction-map", "the junction temperature of every emitter at the end of its dwell",
             [](const Design& design, const Assessment& assessment) {
                 std::vector<double> temperature;
                 for (const EmitterState& emitter : assessment.chip->state.emitters)
                     temperature.push_back(emitter.last_temperature);
                 return junction_map_picture(design.name, assessment.array, temperature);
             },
             true}};
    return list;
}

bool drawable(const View& view, const Assessment& assessment) {
    return !view.needs_diode || assessment.chip.has_value();
}

Canvas points_picture(const Design& design, const Assessment& assessment) {
    PointView view;
    view.heading = {.title = title_of(design, "Points of one frame"),
                    .subtitle = fmt::format("{} points of {} pixels; detection probability at least {}",
                                            assessment.points.size(),
                                            design.receiver.pixels.columns * design.receiver.pixels.rows,
                                            show_quantity(design.sampling.point_probability, Kind::ratio)),
                    .note = picture_note};
    for (const Point& point : assessment.points) view.marks.push_back({point.position, point.range});
    view.colours = {.label = "Range", .unit = "m", .range = {}};
    view.sensor = Vec3(design.placement.x, design.placement.y, design.placement.z);
    return draw(view);
}

Canvas zones_picture(const Design& design, const Assessment& assessment) {
    ZoneMap map;
    const FiringPlan& plan = assessment.plan;
    map.heading = {.title = title_of(design, "Zones over the field"),
                   .subtitle = fmt::format(
                       "{}, {} at once; outlines at half of the peak; numbers count from the upper left",
                       counted(assessment.array.zones, "zone"), plan.zones_at_once),
                   .note = picture_note};
    std::vector<double> first_shot(static_cast<std::size_t>(assessment.array.zones), 0.0);
    for (int dwell = 0; dwell < plan.dwells(); ++dwell)
        for (const int zone : plan.zones_of(dwell)) first_shot[zone] = plan.start[dwell] * 1e3;
    std::vector<std::vector<const Beam*>> beams(first_shot.size());
    for (const Beam& beam : assessment.beams.beams)
        if (beam.power > 0) beams[beam.zone].push_back(&beam);
    // Emitters of an interleaved or listed zone lie apart: show each. Neighbours form one shape.
    const AddressingScheme scheme = design.emitters.addressing.scheme;
    const bool apart = scheme == AddressingScheme::interleaved || scheme == AddressingScheme::list;
    for (std::size_t zone = 0; zone < beams.size(); ++zone) {
        if (beams[zone].empty()) continue;
        ZoneShape shape{.value = first_shot[zone]};
        if (apart) {
            for (const Beam* beam : beams[zone]) {
                shape.polygons.emplace_back();
                for (const Vec3& direction : half_power_outline(*beam))
                    shape.polygons.back().push_back(field_angles(direction));
            }
        } else {
            shape.polygons.push_back(zone_outline(beams[zone]));
            shape.number = std::to_string(zone);
        }
        map.zones.push_back(std::move(shape));
    }
    map.outlines.push_back({receiver_outline(design.receiver), "receiver field"});
    map.colours = {
        .label = "First shot in the frame", .unit = "ms", .range = AxisRange{0, plan.frame_period * 1e3}};
    return draw(map);
}

}  // namespace glint
