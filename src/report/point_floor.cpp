// Floor lines, metres, bar of scale, sensor axes.
#include "report/point_floor.h"

#include <glint/core/constants.h>

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <cmath>

namespace glint {

namespace {

constexpr Colour line_colour = rgb8(120, 130, 142);

constexpr TextStyle metre_style{
    .size = 12, .colour = palette::quiet_ink, .align = Align::centre, .anchor = Anchor::middle, .halo = 1.5};

Vec3 on_floor(const FloorPlan& plan, const Vec2& at) { return {at.x(), at.y(), plan.height}; }

/// Draws a text unless it would touch another or leave the plot.
bool place_text(Canvas& canvas, const Vec2& at, const std::string& text, const TextStyle& style,
                const PageBox& plot) {
    const PageBox box = text_box(at, text, style).grown(2);
    const auto hit = [&](const Label& label) { return label.box.overlaps(box); };
    if (!plot.holds(box) || std::any_of(canvas.labels().begin(), canvas.labels().end(), hit)) return false;
    canvas.text(at, text, style);
    return true;
}

std::string metres(double value) { return number_text(value, 6) + " m"; }

/// Multiples of step from low to high.
std::vector<double> steps(double low, double high, double step) {
    std::vector<double> values;
    for (double k = std::round(low / step); k * step <= high + step / 2; ++k)
        values.push_back(k * step + 0.0);
    return values;
}

bool inside(const FloorPlan& plan, const Vec2& at) {
    return (at.array() >= plan.low.array()).all() && (at.array() <= plan.high.array()).all();
}

/// The pieces of a ring that lie on the floor.
std::vector<std::array<Vec2, 2>> ring_pieces(const FloorPlan& plan, double radius) {
    constexpr int parts = 180;
    const auto at = [&](int i) -> Vec2 {
        return plan.foot + radius * Vec2{std::cos(2 * pi * i / parts), std::sin(2 * pi * i / parts)};
    };
    std::vector<std::array<Vec2, 2>> pieces;
    for (int i = 0; i < parts; ++i)
        if (inside(plan, at(i)) && inside(plan, at(i + 1))) pieces.push_back({at(i), at(i + 1)});
    return pieces;
}

std::vector<double> ring_radii(const FloorPlan& plan) {
    double farthest = 0;
    for (const double x : {plan.low.x(), plan.high.x()})
        for (const double y : {plan.low.y(), plan.high.y()})
            farthest = std::max(farthest, (Vec2{x, y} - plan.foot).norm());
    return steps(plan.step, farthest - plan.step / 2, plan.step);
}

/// The corner of the floor nearest to the eye, and the signs that lead out of the floor there.
struct NearCorner {
    Vec2 at, out;
};
NearCorner near_corner(const FloorPlan& plan, const Camera& camera) {
    const Vec2 middle = (plan.low + plan.high) / 2;
    const bool low_x = camera.eye.x() < middle.x(), low_y = camera.eye.y() < middle.y();
    return {.at = {low_x ? plan.low.x() : plan.high.x(), low_y ? plan.low.y() : plan.high.y()},
            .out = {low_x ? -1.0 : 1.0, low_y ? -1.0 : 1.0}};
}

/// An arrow of the page.
void draw_arrow(Canvas& canvas, const Vec2& from, const Vec2& to, const Colour& colour) {
    const double length = (to - from).norm();
    if (length < 1) return;
    const Vec2 along = (to - from) / length, side{-along.y(), along.x()};
    const double head = std::min(11.0, length * 0.5);
    const Vec2 neck = to - along * head;
    canvas.line(from, neck, {.colour = palette::background, .width = 5.5, .dashes = {}});
    canvas.line(from, neck, {.colour = colour, .width = 3, .dashes = {}});
    canvas.fill_polygon(std::vector<Vec2>{to + along * 2, neck - along * 1.5 + side * head * 0.55,
                                          neck - along * 1.5 - side * head * 0.55},
                        palette::background);
    canvas.fill_polygon(std::vector<Vec2>{to, neck + side * head * 0.42, neck - side * head * 0.42}, colour);
}

}  // namespace

std::vector<Vec3> FloorPlan::corners() const {
    std::vector<Vec3> result;
    for (const double x : {low.x() - 0.05 * size(), high.x()})
        for (const double y : {low.y() - 0.05 * size(), high.y()}) result.push_back({x, y, height});
    result.push_back({low.x() - 0.14 * size(), (low.y() + high.y()) / 2, height});
    return result;
}

FloorPlan plan_floor(const Vec3& low, const Vec3& high, const Vec3& sensor, double height) {
    FloorPlan plan{.height = height, .foot = sensor.head<2>()};
    const Vec2 first = low.head<2>().cwiseMin(plan.foot), last = high.head<2>().cwiseMax(plan.foot);
    const double size = std::max((last - first).maxCoeff(), 1e-3);
    plan.step = std::pow(10, std::floor(std::log10(size / 15)));
    for (const double factor : {2.0, 2.5, 2.0})
        if (plan.step * 15 < size) plan.step *= factor;
    // A hair's breadth over a line is no reason for another row of squares.
    const double slack = 0.02 * plan.step;
    for (int k = 0; k < 2; ++k) {
        plan.low[k] = std::floor((first[k] + slack) / plan.step) * plan.step;
        plan.high[k] =
            std::max(plan.low[k] + plan.step, std::ceil((last[k] - slack) / plan.step) * plan.step);
    }
    return plan;
}

void draw_floor(Canvas& canvas, const DepthMap& depths, const Camera& camera, const FloorPlan& plan,
                Floor kind, double slack) {
    const Pen pen{.colour = with_alpha(line_colour, 0.5), .width = 0.9, .dashes = {}};
    const auto draw = [&](const Vec2& from, const Vec2& to) {
        draw_line(canvas, depths, camera, on_floor(plan, from), on_floor(plan, to), pen, slack);
    };
    const auto frame_only = kind == Floor::rings;
    for (const double x : steps(plan.low.x(), plan.high.x(), plan.step))
        if (!frame_only || x == plan.low.x() || x == plan.high.x())
            draw({x, plan.low.y()}, {x, plan.high.y()});
    for (const double y : steps(plan.low.y(), plan.high.y(), plan.step))
        if (!frame_only || y == plan.low.y() || y == plan.high.y())
            draw({plan.low.x(), y}, {plan.high.x(), y});
    if (kind != Floor::rings) return;
    for (const double radius : ring_radii(plan))
        for (const auto& [from, to] : ring_pieces(plan, radius)) draw(from, to);
}

void label_floor(Canvas& canvas, const Camera& camera, const FloorPlan& plan, Floor kind,
                 const PageBox& plot) {
    const NearCorner corner = near_corner(plan, camera);
    const double away = 0.035 * plan.size();
    const auto write = [&](const Vec2& at, const std::string& text) {
        const Sight sight = camera.see(on_floor(plan, at));
        return sight.depth > 0 && place_text(canvas, sight.at, text, metre_style, plot);
    };
    if (kind == Floor::rings) {
        // Where the ring leaves the floor on one of the two sides next to the eye.
        const Vec2 reach = corner.at - plan.foot;
        for (const double radius : ring_radii(plan)) {
            const auto other = [&](double side) {
                return std::sqrt(std::max(0.0, radius * radius - side * side));
            };
            const Vec2 on_y{plan.foot.x() - corner.out.x() * other(reach.y()), corner.at.y()};
            const Vec2 on_x{corner.at.x(), plan.foot.y() + corner.out.y() * other(reach.x())};
            const bool leaves_y = radius >= std::abs(reach.y()) && inside(plan, on_y);
            const bool leaves_x = radius >= std::abs(reach.x()) && inside(plan, on_x);
            if (leaves_y)
                write(on_y + Vec2{0, corner.out.y() * away}, metres(radius));
            else if (leaves_x)
                write(on_x + Vec2{corner.out.x() * away, 0}, metres(radius));
        }
    } else {
        for (const double x : steps(plan.low.x(), plan.high.x(), plan.step))
            write({x, corner.at.y() + corner.out.y() * away}, metres(x));
        for (const double y : steps(plan.low.y(), plan.high.y(), plan.step))
            if (y != corner.at.y()) write({corner.at.x() + corner.out.x() * away, y}, metres(y));
    }
    // The bar lies on the floor, so that it is true where it lies; its parts alternate.
    const double x = corner.at.x() + corner.out.x() * 0.085 * plan.size(),
                 thick = 3.5 * camera.see(on_floor(plan, {x, plan.foot.y()})).depth / camera.focal;
    const double parts = std::min(2.0, std::round((plan.high.y() - plan.low.y()) / plan.step));
    const double start = (plan.low.y() + plan.high.y()) / 2 - parts / 2 * plan.step;
    std::vector<Vec2> middle;
    for (double part = 0; part < parts; ++part) {
        std::vector<Vec2> shape;
        for (const auto& [along, over] : {std::pair{0, -1}, {1, -1}, {1, 1}, {0, 1}})
            shape.push_back(
                camera.see(on_floor(plan, {x + over * thick, start + (part + along) * plan.step})).at);
        canvas.fill_polygon(shape, part == 0 ? palette::ink : palette::background);
        canvas.polyline(shape, {.colour = palette::ink, .width = 1, .dashes = {}}, true);
    }

    write({x + corner.out.x() * 0.03 * plan.size(), start + parts / 2 * plan.step},
          metres(parts * plan.step));
}

void draw_sensor(Canvas& canvas, const Camera& camera, const FloorPlan& plan, const Vec3& sensor,
                 const PageBox& plot) {
    const Sight origin = camera.see(sensor), foot = camera.see(on_floor(plan, plan.foot));
    if (origin.depth <= 0) return;
    const double length = 62 * origin.depth / camera.focal;  // 62 units long where they face the eye
    if (foot.depth > 0 && (foot.at - origin.at).norm() > 4) {
        canvas.line(origin.at, foot.at,
                    {.colour = palette::ink, .width = 1.2, .cap = Cap::butt, .dashes = {3, 3}});
        canvas.fill_disc(foot.at, 2.2, palette::ink);
    }
    const std::array<Vec3, 3> axes{Vec3::UnitX(), Vec3::UnitY(), Vec3::UnitZ()};
    const std::array<Colour, 3> colours{palette::categories[1], palette::categories[5],
                                        palette::categories[0]};
    const std::array<const char*, 3> names{"x", "y", "z"};
    std::array<std::size_t, 3> order{0, 1, 2};
    std::sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) {
        return axes[a].dot(camera.forward) > axes[b].dot(camera.forward);
    });
    for (const std::size_t k : order) {
        const Vec2 tip = camera.see(sensor + length * axes[k]).at;
        draw_arrow(canvas, origin.at, tip, colours[k]);
    }
    canvas.fill_disc(origin.at, 5, palette::background);
    canvas.fill_disc(origin.at, 3.8, palette::ink);
    for (const std::size_t k : order) {
        const Vec2 tip = camera.see(sensor + length * axes[k]).at;
        const Vec2 out = (tip - origin.at).norm() > 1 ? Vec2((tip - origin.at).normalized()) : Vec2{0, -1};
        place_text(canvas, tip + 10 * out, names[k],
                   {.size = 13,
                    .weight = Weight::semibold,
                    .colour = colours[k],
                    .align = Align::centre,
                    .anchor = Anchor::middle,
                    .halo = 1.5},
                   plot);
    }
    const TextStyle style{.size = 12.5,
                          .weight = Weight::semibold,
                          .align = Align::centre,
                          .anchor = Anchor::middle,
                          .halo = 1.8};
    const double half = text_width("sensor", style.size, style.weight) / 2 + 12;
    for (const Vec2& shift : {Vec2{half - 4, 14}, Vec2{4 - half, 14}, Vec2{0, 18}, Vec2{0, -18}})
        if (place_text(canvas, origin.at + shift, "sensor", style, plot)) break;
}

}  // namespace glint
