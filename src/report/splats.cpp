// Discs in space: depth, blending, shading of edges.
#include "report/splats.h"

#include <glint/core/constants.h>
#include <glint/core/parallel.h>

#include <algorithm>
#include <array>
#include <cmath>

namespace glint {

namespace {

constexpr int band_height = 32;

/// A disc made ready for the pixels: its place in the image and its plane.
struct Footprint {
    Vec2 at = Vec2::Zero();  ///< pixels
    double depth = 0;
    double radius = 0;  ///< pixels, facing the eye
    double reach = 0;   ///< half the width of the square that may show it, pixels
    double slack = 0;   ///< how far behind the front a disc still blends, m
    bool tilted = false;
};

Footprint footprint_of(const Splat& splat, const Camera& camera, double density) {
    const Sight sight = camera.see(splat.centre);
    if (sight.depth <= 0) return {};
    const double radius = splat.radius * camera.focal / sight.depth * density;
    const Vec3 view = (camera.eye - splat.centre).normalized();
    // Seen nearly edge on, or a pixel small, the plane says nothing that could be drawn.
    const bool tilted = splat.normal && splat.normal->dot(view) > 0.12 && radius > 1.2;
    return {.at = sight.at * density,
            .depth = sight.depth,
            .radius = radius,
            .reach = radius + 1,
            .slack = splat.radius,
            .tilted = tilted};
}

/// Colour sums of a window.
struct Layer {
    std::vector<float> depth, red, green, blue, weight, cover;
    explicit Layer(std::size_t pixels)
        : depth(pixels, INFINITY),
          red(pixels, 0),
          green(pixels, 0),
          blue(pixels, 0),
          weight(pixels, 0),
          cover(pixels, 0) {}
};

/// What one disc does to one pixel: where its plane is met, and how far out on the disc.
struct Fragment {
    double depth = 0;
    double out = 2;  ///< distance from the centre over the radius; above 1: outside
};

Fragment fragment_of(const Splat& splat, const Footprint& foot, const Camera& camera, const Vec2& pixel,
                     double density) {
    if (!foot.tilted) return {.depth = foot.depth, .out = (pixel - foot.at).norm() / foot.radius};
    const Vec3 ray = camera.ray(pixel / density);
    const double facing = splat.normal->dot(ray);
    const double depth = splat.normal->dot(splat.centre - camera.eye) / facing;
    return {.depth = depth, .out = (camera.eye + depth * ray - splat.centre).norm() / splat.radius};
}

/// Calls visit(splat number, pixel slot, fragment) for every pixel that a disc may show in, discs in their
/// order.
template <class Visit>
void rasterise(std::span<const Splat> splats, std::span<const Footprint> feet,
               std::span<const std::uint32_t> chosen, const PixelWindow& whole, const PixelWindow& band,
               const Camera& camera, double density, Visit&& visit) {
    for (const std::uint32_t i : chosen) {
        const Footprint& foot = feet[i];
        const int top = std::max(band.top, static_cast<int>(std::floor(foot.at.y() - foot.reach)));
        const int bottom = std::min(band.bottom, static_cast<int>(std::ceil(foot.at.y() + foot.reach)) + 1);
        const int left = std::max(band.left, static_cast<int>(std::floor(foot.at.x() - foot.reach)));
        const int right = std::min(band.right, static_cast<int>(std::ceil(foot.at.x() + foot.reach)) + 1);
        for (int row = top; row < bottom; ++row)
            for (int column = left; column < right; ++column) {
                const Fragment fragment =
                    fragment_of(splats[i], foot, camera, Vec2{column + 0.5, row + 0.5}, density);
                const std::size_t slot =
                    static_cast<std::size_t>(row - whole.top) * whole.width() + (column - whole.left);
                visit(i, slot, fragment);
            }
    }
}

/// Steps to the eight pixels around one, at two distances.
struct Surrounding {
    std::array<std::array<int, 2>, 8> near, far;
    explicit Surrounding(double density) {
        for (int k = 0; k < 8; ++k) {
            const double across = std::cos(k * pi / 4) * density, down = std::sin(k * pi / 4) * density;
            near[k] = {static_cast<int>(std::lround(0.8 * across)),
                       static_cast<int>(std::lround(0.8 * down))};
            far[k] = {static_cast<int>(std::lround(2.2 * across)), static_cast<int>(std::lround(2.2 * down))};
        }
    }
};

/// Share of the light that eye-dome shading leaves at a pixel: what is nearer around it takes light away,
/// each neighbour up to a bound so that a step to a far background is an edge like any other.
double light_left(std::span<const float> log_depth, const PixelWindow& window, int column, int row,
                  const Surrounding& around) {
    const float own = log_depth[static_cast<std::size_t>(row) * window.width() + column];
    const auto darkness = [&](const std::array<std::array<int, 2>, 8>& steps) {
        double sum = 0;
        for (const auto& [across, down] : steps) {
            const int x = column + across, y = row + down;
            if (x < 0 || y < 0 || x >= window.width() || y >= window.height()) continue;
            // Nothing there: infinitely far, and takes no light; infinity minus infinity does not arise.
            const float other = log_depth[static_cast<std::size_t>(y) * window.width() + x];
            if (other < own) sum += std::clamp(own - other - 0.003, 0.0, 0.05);
        }
        return sum / 8;
    };
    const double shade = 16 * darkness(around.near) + 11 * darkness(around.far);
    return shade == 0 ? 1 : std::exp(-shade);
}

/// The part of `plot` that the discs can touch, with room for the shading around them.
PixelWindow window_of(std::span<const Footprint> feet, const PageBox& plot, double density) {
    PixelWindow window{.left = static_cast<int>(std::ceil(plot.right * density)),
                       .top = static_cast<int>(std::ceil(plot.bottom * density))};
    const PixelWindow limit{.left = static_cast<int>(std::floor(plot.left * density)),
                            .top = static_cast<int>(std::floor(plot.top * density)),
                            .right = window.left,
                            .bottom = window.top};
    window.right = limit.left, window.bottom = limit.top;
    for (const Footprint& foot : feet) {
        if (!(foot.depth > 0)) continue;
        const double reach = foot.reach + 3 * density;
        const auto cut = [](double value, int low, int high) {
            return static_cast<int>(std::clamp<double>(value, low, high));
        };
        window.left = std::min(window.left, cut(std::floor(foot.at.x() - reach), limit.left, limit.right));
        window.top = std::min(window.top, cut(std::floor(foot.at.y() - reach), limit.top, limit.bottom));
        window.right = std::max(window.right, cut(std::ceil(foot.at.x() + reach), limit.left, limit.right));
        window.bottom = std::max(window.bottom, cut(std::ceil(foot.at.y() + reach), limit.top, limit.bottom));
    }
    return window;
}

}  // namespace

float DepthMap::at(int column, int row) const {
    const bool inside =
        column >= window.left && column < window.right && row >= window.top && row < window.bottom;
    return inside
               ? depth[static_cast<std::size_t>(row - window.top) * window.width() + (column - window.left)]
               : INFINITY;
}

DepthMap draw_splats(Canvas& canvas, const PageBox& plot, const Camera& camera,
                     std::span<const Splat> splats) {
    const double density = canvas.density();
    std::vector<Footprint> feet(splats.size());
    parallel_for(splats.size(), [&](std::size_t i) { feet[i] = footprint_of(splats[i], camera, density); });
    const PixelWindow window = window_of(feet, plot, density);
    const auto bands = static_cast<std::size_t>((window.height() + band_height - 1) / band_height);
    std::vector<std::vector<std::uint32_t>> chosen(bands);
    for (std::size_t i = 0; i < feet.size(); ++i) {
        if (!(feet[i].depth > 0)) continue;
        const double first = (feet[i].at.y() - feet[i].reach - window.top) / band_height;
        const double last = (feet[i].at.y() + feet[i].reach + 1 - window.top) / band_height;
        for (double band = std::max(0.0, std::floor(first));
             band <= last && band < static_cast<double>(bands); ++band)
            chosen[static_cast<std::size_t>(band)].push_back(static_cast<std::uint32_t>(i));
    }
    Layer layer(static_cast<std::size_t>(window.width()) * window.height());
    parallel_for(bands, [&](std::size_t number) {
        PixelWindow band = window;
        band.top = window.top + static_cast<int>(number) * band_height;
        band.bottom = std::min(window.bottom, band.top + band_height);
        rasterise(splats, feet, chosen[number], window, band, camera, density,
                  [&](std::uint32_t, std::size_t slot, const Fragment& fragment) {
                      if (fragment.out <= 1)
                          layer.depth[slot] = std::min(layer.depth[slot], static_cast<float>(fragment.depth));
                  });
        rasterise(splats, feet, chosen[number], window, band, camera, density,
                  [&](std::uint32_t i, std::size_t slot, const Fragment& fragment) {
                      const double cover = std::clamp((1 - fragment.out) * feet[i].radius + 0.5, 0.0, 1.0);
                      if (cover == 0 || fragment.depth > layer.depth[slot] + feet[i].slack) return;
                      const double weight = cover * (0.02 + std::max(0.0, 1 - fragment.out * fragment.out));
                      layer.red[slot] += static_cast<float>(weight * splats[i].colour.red);
                      layer.green[slot] += static_cast<float>(weight * splats[i].colour.green);
                      layer.blue[slot] += static_cast<float>(weight * splats[i].colour.blue);
                      layer.weight[slot] += static_cast<float>(weight);
                      // Gaps between discs are closed by all that touch them together.
                      layer.cover[slot] = 1 - (1 - layer.cover[slot]) * static_cast<float>(1 - cover);
                  });
    });
    std::vector<float> log_depth(layer.depth.size()), light(layer.depth.size());
    const Surrounding around(density);
    const auto rows = static_cast<std::size_t>(window.height());
    parallel_for(layer.depth.size(), [&](std::size_t i) { log_depth[i] = std::log(layer.depth[i]); });
    parallel_for(rows, [&](std::size_t row) {
        for (int column = 0; column < window.width(); ++column)
            light[row * window.width() + column] =
                static_cast<float>(light_left(log_depth, window, column, static_cast<int>(row), around));
    });
    for (int row = 0; row < window.height(); ++row)
        for (int column = 0; column < window.width(); ++column) {
            const std::size_t slot = static_cast<std::size_t>(row) * window.width() + column;
            if (light[slot] < 1)
                canvas.pixel(window.left + column, window.top + row, palette::ink, 1 - light[slot]);
            if (layer.weight[slot] == 0) continue;
            const double weight = layer.weight[slot], shade = light[slot];
            const Colour colour{.red = layer.red[slot] / weight * shade,
                                .green = layer.green[slot] / weight * shade,
                                .blue = layer.blue[slot] / weight * shade};
            canvas.pixel(window.left + column, window.top + row, colour, layer.cover[slot]);
        }
    return {.window = window, .depth = std::move(layer.depth)};
}

void draw_line(Canvas& canvas, const DepthMap& depths, const Camera& camera, const Vec3& from, const Vec3& to,
               const Pen& pen, double slack) {
    // Short pieces keep the windows of pixels small.
    constexpr int pieces = 24;
    const PixelWindow image{
        .left = 0, .top = 0, .right = canvas.pixel_width(), .bottom = canvas.pixel_height()};
    const double density = canvas.density(), nearest = 1e-3;
    for (int piece = 0; piece < pieces; ++piece) {
        const Sight a = camera.see(from + (to - from) * piece / pieces),
                    b = camera.see(from + (to - from) * (piece + 1) / pieces);
        if (a.depth < nearest || b.depth < nearest) continue;
        const Vec2 run = (b.at - a.at) * density;
        if (run.norm() == 0) continue;
        const Vec2 side = Vec2{-run.y(), run.x()}.normalized() * pen.width * density / 2;
        const Vec2 start = a.at * density, end = b.at * density;
        const std::vector<Vec2> ring{start + side, end + side, end - side, start - side};
        const Coverage coverage = cover({&ring, 1}, image);
        for (int row = coverage.window.top; row < coverage.window.bottom; ++row)
            for (int column = coverage.window.left; column < coverage.window.right; ++column) {
                const float share =
                    coverage
                        .share[static_cast<std::size_t>(row - coverage.window.top) * coverage.window.width() +
                               (column - coverage.window.left)];
                if (share == 0) continue;
                // Along a straight line of the page the inverse of depth changes evenly.
                const double along = std::clamp(
                    (Vec2{column + 0.5, row + 0.5} - start).dot(run) / run.squaredNorm(), 0.0, 1.0);
                const double depth = 1 / ((1 - along) / a.depth + along / b.depth);
                if (depth <= depths.at(column, row) * (1 + slack))
                    canvas.pixel(column, row, pen.colour, share);
            }
    }
}

}  // namespace glint
