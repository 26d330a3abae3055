// A cloud of points in perspective: sizes, cut-away, and the order of drawing.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/report/point_view.h>

#include "report/camera.h"
#include "report/neighbours.h"
#include "report/point_floor.h"
#include "report/splats.h"

#include <algorithm>
#include <cmath>

namespace glint {

namespace {

/// The box of space the picture is about: stray marks, one in a thousand at each end, do not count.
struct Bounds {
    Vec3 low = Vec3::Constant(-1), high = Vec3::Constant(1);
};
Bounds bounds_of(const PointView& view) {
    if (view.marks.empty())
        return {.low = view.sensor - Vec3{0.5, 1.5, 1}, .high = view.sensor + Vec3{3, 1.5, 1}};
    Bounds bounds;
    std::vector<double> values(view.marks.size());
    const auto stray = static_cast<std::ptrdiff_t>(values.size() / 1000);
    for (int k = 0; k < 3; ++k) {
        std::transform(view.marks.begin(), view.marks.end(), values.begin(),
                       [k](const Mark& mark) { return mark.position[k]; });
        std::sort(values.begin(), values.end());
        bounds.low[k] = values[static_cast<std::size_t>(stray)];
        bounds.high[k] = values[values.size() - 1 - static_cast<std::size_t>(stray)];
    }
    return bounds;
}

FloorPlan floor_of(const PointView& view, const Bounds& bounds) {
    // A hair under the lowest marks, so that marks on the floor hide its far side and not its lines.
    const double under = bounds.low.z() - 1e-3 * (bounds.high - bounds.low).norm();
    return plan_floor(bounds.low, bounds.high, view.sensor,
                      view.floor_height.value_or(std::min(under, view.sensor.z())));
}

FrameContent surround_of(const PointView& view) {
    std::vector<double> values;
    for (const Mark& mark : view.marks) {
        if (!mark.position.allFinite())
            throw Error(
                Problem{.what = "a point has a position that is not finite", .accepted = "finite metres"});
        values.push_back(mark.value);
    }
    FrameContent content{.heading = view.heading};
    content.colours = settle(view.colours, values);
    content.grid = false;
    return content;
}

Viewpoint viewpoint_for(const PointView& view, const PageBox& plot) {
    if (view.viewpoint) return *view.viewpoint;
    const Bounds bounds = bounds_of(view);
    const FloorPlan floor = floor_of(view, bounds);
    std::vector<Vec3> shown = floor.corners();
    for (int k = 0; k < 8; ++k)
        shown.push_back({k & 1 ? bounds.low.x() : bounds.high.x(), k & 2 ? bounds.low.y() : bounds.high.y(),
                         k & 4 ? bounds.low.z() : bounds.high.z()});
    shown.push_back(view.sensor);
    return viewpoint_around(shown, Vec3{-0.72, -0.42, 0.50}, plot.width() / plot.height(), 0.97);
}

/// Half the marks have neighbours closer than this on the page [units].
double typical_spacing(std::span<const Mark> marks, std::span<const LocalSurface> surfaces,
                       const Camera& camera) {
    std::vector<double> spacings;
    for (std::size_t i = 0; i < marks.size(); ++i)
        if (const double depth = camera.see(marks[i].position).depth; depth > 0)
            spacings.push_back(surfaces[i].spacing * camera.focal / depth);
    if (spacings.empty()) return 0;
    const auto middle = spacings.begin() + static_cast<std::ptrdiff_t>(spacings.size() / 2);
    std::nth_element(spacings.begin(), middle, spacings.end());
    return *middle;
}

/// Marks as discs; those of surfaces seen from behind apart.
struct Cloud {
    std::vector<Splat> splats, behind;
    bool dots = false;  ///< too sparse to close up to surfaces
};

/// The colour lighter when the surface faces the light, darker when it turns away: by the same step of
/// lightness whatever the colour, so that dark ends of a scale keep their shapes.
Colour lit(const Colour& colour, double facing) {
    Oklab lab = to_oklab(colour);
    lab.lightness += 0.12 * (facing - 0.55);
    return from_oklab(lab);
}

/// Radius of a mark with neighbours `spacing` away on the page [units]: close ones close up to a surface,
/// wider ones shrink to a dot, and marks in no surface (leaves, edges) stay small.
double mark_radius(const LocalSurface& local, double units, double dot) {
    constexpr double closed = 11, apart = 18, largest = 6.5;
    const double spacing = local.spacing * units;
    if (!local.flat) return std::clamp(0.5 * local.closest * units, 0.8, dot);
    if (spacing <= closed) return std::clamp(0.68 * spacing, 0.8, largest);
    return largest + (dot - largest) * std::min(1.0, (spacing - closed) / (apart - closed));
}

Cloud cloud_of(const PointView& view, std::span<const LocalSurface> surfaces, const Camera& camera,
               const SettledScale& colours, double middle_depth) {
    const Vec3 light = (0.7 * camera.up - 0.4 * camera.right - 0.6 * camera.forward).normalized();
    Cloud cloud;
    const double typical = typical_spacing(view.marks, surfaces, camera);
    cloud.dots = typical == 0 || typical > 13;
    for (std::size_t i = 0; i < surfaces.size(); ++i) {
        const Vec3& position = view.marks[i].position;
        const double depth = camera.see(position).depth;
        if (depth <= 0) continue;
        const LocalSurface& local = surfaces[i];
        const double units = camera.focal / depth;
        // A mark alone is a dot, larger when near.
        const double dot = std::clamp(3.2 * middle_depth / depth, 2.0, 5.0);
        const bool alone = cloud.dots || local.spacing == 0 || local.spacing * units > 22;
        const double radius = alone ? dot : mark_radius(local, units, dot);
        Splat splat{.centre = position, .normal = {}, .radius = view.mark_scale * radius / units};
        splat.colour =
            std::isnan(view.marks[i].value) ? palette::no_data_line : colours.of(view.marks[i].value);
        if (local.flat && !alone) {
            // The sensor saw the outer side; the eye may be on the other one.
            Vec3 normal = local.normal;
            if (normal.dot(view.sensor - position) < 0) normal = -normal;
            const bool away = normal.dot(camera.eye - position) < 0;
            if (away && view.cut_away) {
                cloud.behind.push_back(splat);
                continue;
            }
            splat.normal = away ? Vec3(-normal) : normal;
        }
        if (splat.normal) splat.colour = lit(splat.colour, std::max(0.0, splat.normal->dot(light)));
        cloud.splats.push_back(splat);
    }
    return cloud;
}

std::vector<LocalSurface> surfaces_of(const PointView& view) {
    std::vector<Vec3> positions;
    for (const Mark& mark : view.marks) positions.push_back(mark.position);
    return local_surfaces(positions);
}

/// A page with its camera and what that sees.
struct Scene {
    Frame frame;
    Camera camera;
    Cloud cloud;
};

Scene arrange(const PointView& view, std::span<const LocalSurface> surfaces, const Frame& frame) {
    const Viewpoint viewpoint = viewpoint_for(view, frame.plot);
    const Camera camera = camera_of(viewpoint, frame.plot);
    const double distance = (viewpoint.target - viewpoint.eye).norm();
    return {.frame = frame,
            .camera = camera,
            .cloud = cloud_of(view, surfaces, camera, *frame.content.colours, distance)};
}

/// Dots that hang in the air say where they are by the shadow below them.
void draw_shadows(Canvas& canvas, const Camera& camera, std::span<const Splat> splats, double height) {
    for (const Splat& splat : splats) {
        std::vector<Vec2> ring;
        for (int k = 0; k < 16; ++k) {
            const Vec3 rim =
                splat.centre + 0.8 * splat.radius * Vec3{std::cos(k * pi / 8), std::sin(k * pi / 8), 0};
            const Sight sight = camera.see({rim.x(), rim.y(), height});
            if (sight.depth > 0) ring.push_back(sight.at);
        }
        if (ring.size() == 16 && splat.centre.z() > height + splat.radius)
            canvas.fill_polygon(ring, palette::grid);
    }
}

}  // namespace

Viewpoint automatic_viewpoint(const PointView& view) {
    return viewpoint_for(view, lay_out({0, 0, view.size.width, view.size.height}, surround_of(view)).plot);
}

Canvas draw(const PointView& view) {
    FrameContent content = surround_of(view);
    const PageBox page{0, 0, view.size.width, view.size.height};
    const std::vector<LocalSurface> surfaces = surfaces_of(view);
    const Bounds bounds = bounds_of(view);
    const FloorPlan floor = floor_of(view, bounds);
    Scene scene = arrange(view, surfaces, lay_out(page, content));
    if (!scene.cloud.behind.empty()) {
        // The note takes a line of the page from the picture.
        std::string& note = content.heading.note;
        note += std::string(note.empty() ? "" : " ") + "Cut away: surfaces seen from behind are faint dots.";
        scene = arrange(view, surfaces, lay_out(page, content));
    }
    const auto& [frame, camera, cloud] = scene;
    Canvas canvas(view.size.width, view.size.height, view.size.density);
    canvas.clip(frame.plot);
    for (const Splat& splat : cloud.behind)
        canvas.fill_disc(camera.see(splat.centre).at, 0.6, mix(palette::background, splat.colour, 0.3));
    if (cloud.dots && view.floor != Floor::none) draw_shadows(canvas, camera, cloud.splats, floor.height);
    const DepthMap depths = draw_splats(canvas, frame.plot, camera, cloud.splats);
    if (view.floor != Floor::none) {
        // Over a closed floor of marks the lines still show; round dots hide them.
        draw_floor(canvas, depths, camera, floor, view.floor, cloud.dots ? -0.02 : 0.006);
        label_floor(canvas, camera, floor, view.floor, frame.plot);
    }
    draw_sensor(canvas, camera, floor, view.sensor, frame.plot);
    canvas.clip(std::nullopt);
    draw_surround(canvas, frame);
    return canvas;
}

}  // namespace glint
