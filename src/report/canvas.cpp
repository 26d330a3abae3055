// Drawing: every shape becomes polygons, polygons become coverage, coverage is blended.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/report/canvas.h>

#include <algorithm>
#include <array>
#include <cmath>

namespace glint {

namespace {

std::uint8_t byte_of(double part) {
    return static_cast<std::uint8_t>(std::lround(255 * std::clamp(part, 0.0, 1.0)));
}

/// Corners of a regular polygon with exactly the area of the disc, within 0.05 of its rim.
std::vector<Vec2> disc_ring(const Vec2& centre, double radius) {
    const int corners = std::clamp(static_cast<int>(std::ceil(10 * std::sqrt(radius))), 16, 720);
    const double step = 2 * pi / corners, grown = radius * std::sqrt(step / std::sin(step));
    std::vector<Vec2> ring;
    for (int i = 0; i < corners; ++i)
        ring.push_back(centre + grown * Vec2{std::cos(step * i), std::sin(step * i)});
    return ring;
}

/// A line from `from` to `to`, `radius` to each side, each end square or round. All in pixels.
std::vector<Vec2> bar_ring(const Vec2& from, const Vec2& to, double radius, bool round_from, bool round_to) {
    const Vec2 run = to - from;
    const Vec2 along = run.norm() > 0 ? Vec2(run.normalized()) : Vec2{1, 0};
    const Vec2 side{-along.y(), along.x()};
    const int parts = std::clamp(static_cast<int>(std::ceil(5 * std::sqrt(radius))), 6, 90);
    std::vector<Vec2> ring;
    const auto end = [&](const Vec2& centre, double sign, bool round) {
        ring.push_back(centre + sign * radius * side);
        for (int i = 1; round && i < parts; ++i) {
            const double angle = pi * i / parts;
            ring.push_back(centre + sign * radius * (std::cos(angle) * side + std::sin(angle) * along));
        }
        ring.push_back(centre - sign * radius * side);
    };
    end(to, 1, round_to);
    end(from, -1, round_from);
    return ring;
}

/// The pieces of a line that its dashes leave, each a chain of points.
std::vector<std::vector<Vec2>> dashed(std::span<const Vec2> points, std::span<const double> dashes) {
    if (std::any_of(dashes.begin(), dashes.end(), [](double length) { return !(length > 0); }))
        throw Error(Problem{.what = "a dash has no length", .accepted = "lengths above 0"});
    std::vector<std::vector<Vec2>> chains;
    std::size_t phase = 0;
    double left = dashes[0];
    for (std::size_t i = 0; i + 1 < points.size(); ++i) {
        const double length = (points[i + 1] - points[i]).norm();
        if (chains.empty()) chains.push_back({points[i]});
        for (double at = 0; at < length;) {
            const double step = std::min(left, length - at);
            at += step;
            left -= step;
            const bool drawn = phase % 2 == 0;
            const Vec2 here = points[i] + (points[i + 1] - points[i]) * (at / length);
            if (drawn) chains.back().push_back(here);
            if (left > 0) continue;
            phase = (phase + 1) % dashes.size();
            left = dashes[phase];
            if (!drawn) chains.push_back({here});
        }
    }
    return chains;
}

PixelWindow whole(const std::vector<std::vector<Vec2>>& rings, const PixelWindow& clip) {
    PixelWindow window{.left = clip.right, .top = clip.bottom, .right = clip.left, .bottom = clip.top};
    const auto cut = [](double value, int low, int high) {
        return static_cast<int>(std::clamp<double>(value, low, high));
    };
    for (const std::vector<Vec2>& ring : rings)
        for (const Vec2& corner : ring) {
            window.left = std::min(window.left, cut(std::floor(corner.x()), clip.left, clip.right));
            window.top = std::min(window.top, cut(std::floor(corner.y()), clip.top, clip.bottom));
            window.right = std::max(window.right, cut(std::ceil(corner.x()), clip.left, clip.right));
            window.bottom = std::max(window.bottom, cut(std::ceil(corner.y()), clip.top, clip.bottom));
        }
    return window;
}

/// Pixels under any of the polygons: the largest share any of them has, so that overlaps count once.
Coverage cover_union(const std::vector<std::vector<Vec2>>& rings, const PixelWindow& clip) {
    Coverage all{.window = whole(rings, clip), .share = {}};
    if (all.window.width() == 0 || all.window.height() == 0) return all;
    all.share.assign(static_cast<std::size_t>(all.window.width()) * all.window.height(), 0.0f);
    for (const std::vector<Vec2>& ring : rings) {
        const Coverage one = cover({&ring, 1}, all.window);
        for (int row = 0; row < one.window.height(); ++row)
            for (int column = 0; column < one.window.width(); ++column) {
                const std::size_t at =
                    static_cast<std::size_t>(row + one.window.top - all.window.top) * all.window.width() +
                    (column + one.window.left - all.window.left);
                all.share[at] = std::max(
                    all.share[at], one.share[static_cast<std::size_t>(row) * one.window.width() + column]);
            }
    }
    return all;
}

}  // namespace

bool PageBox::holds(const PageBox& other) const {
    return other.left >= left && other.right <= right && other.top >= top && other.bottom <= bottom;
}

bool PageBox::overlaps(const PageBox& other) const {
    return left < other.right && other.left < right && top < other.bottom && other.top < bottom;
}

PageBox PageBox::grown(double by) const { return {left - by, top - by, right + by, bottom + by}; }

std::vector<Vec2> PageBox::corners() const {
    return {{left, top}, {right, top}, {right, bottom}, {left, bottom}};
}

Canvas::Canvas(double width, double height, double density, const Colour& background) : density_(density) {
    const double columns = std::round(width * density), rows = std::round(height * density);
    if (!(columns >= 1 && columns <= 16384 && rows >= 1 && rows <= 16384 && density > 0))
        throw Error(
            Problem{.what = "a picture cannot have this size", .accepted = "1 to 16384 pixels each way"});
    pixel_width_ = static_cast<int>(columns);
    pixel_height_ = static_cast<int>(rows);
    clip_ = {.left = 0, .top = 0, .right = pixel_width_, .bottom = pixel_height_};
    const std::array<std::uint8_t, 3> ground{byte_of(background.red), byte_of(background.green),
                                             byte_of(background.blue)};
    pixels_.resize(static_cast<std::size_t>(pixel_width_) * pixel_height_ * 3);
    for (std::size_t i = 0; i < pixels_.size(); ++i) pixels_[i] = ground[i % 3];
}

void Canvas::clip(const std::optional<PageBox>& box) {
    const auto cut = [this](double units, int limit) {
        return static_cast<int>(std::clamp<double>(std::round(units * density_), 0, limit));
    };
    clip_ = {.left = 0, .top = 0, .right = pixel_width_, .bottom = pixel_height_};
    if (box)
        clip_ = {.left = cut(box->left, pixel_width_),
                 .top = cut(box->top, pixel_height_),
                 .right = cut(box->right, pixel_width_),
                 .bottom = cut(box->bottom, pixel_height_)};
}

void Canvas::pixel(int column, int row, const Colour& colour, double share) {
    if (column < clip_.left || column >= clip_.right || row < clip_.top || row >= clip_.bottom) return;
    std::uint8_t* part = &pixels_[(static_cast<std::size_t>(row) * pixel_width_ + column) * 3];
    const double cover = std::clamp(share * colour.alpha, 0.0, 1.0);
    for (const double value : {colour.red, colour.green, colour.blue}) {
        *part = static_cast<std::uint8_t>(
            std::lround(*part + (255 * std::clamp(value, 0.0, 1.0) - *part) * cover));
        ++part;
    }
}

void Canvas::blend(const Coverage& coverage, const Colour& colour) {
    const PixelWindow& window = coverage.window;
    for (int row = window.top; row < window.bottom; ++row)
        for (int column = window.left; column < window.right; ++column) {
            const float share = coverage.share[static_cast<std::size_t>(row - window.top) * window.width() +
                                               (column - window.left)];
            if (share > 0) pixel(column, row, colour, share);
        }
}

void Canvas::fill_rings(std::span<const std::vector<Vec2>> rings, const Colour& colour) {
    std::vector<std::vector<Vec2>> scaled(rings.begin(), rings.end());
    for (std::vector<Vec2>& ring : scaled)
        for (Vec2& corner : ring) corner = device(corner);
    blend(cover(scaled, clip_), colour);
}

void Canvas::fill_polygon(std::span<const Vec2> corners, const Colour& colour) {
    const std::vector<Vec2> ring(corners.begin(), corners.end());
    fill_rings({&ring, 1}, colour);
}

void Canvas::fill_box(const PageBox& box, const Colour& colour) { fill_polygon(box.corners(), colour); }

void Canvas::fill_disc(const Vec2& centre, double radius, const Colour& colour) {
    const std::vector<Vec2> ring = disc_ring(device(centre), radius * density_);
    blend(cover({&ring, 1}, clip_), colour);
}

void Canvas::line(const Vec2& from, const Vec2& to, const Pen& pen) {
    polyline(std::vector<Vec2>{from, to}, pen);
}

void Canvas::polyline(std::span<const Vec2> points, const Pen& pen, bool closed) {
    if (points.empty()) return;
    std::vector<Vec2> chain(points.begin(), points.end());
    if (closed) chain.push_back(chain.front());
    const std::vector<std::vector<Vec2>> chains =
        pen.dashes.empty() ? std::vector<std::vector<Vec2>>{chain} : dashed(chain, pen.dashes);
    std::vector<std::vector<Vec2>> bars;
    for (const std::vector<Vec2>& piece : chains)
        for (std::size_t i = 0; i + 1 < piece.size(); ++i) {
            const bool joined = closed && pen.dashes.empty();
            const bool round_from = i > 0 || joined || pen.cap == Cap::round;
            const bool round_to = i + 2 < piece.size() || joined || pen.cap == Cap::round;
            bars.push_back(bar_ring(device(piece[i]), device(piece[i + 1]), pen.width * density_ / 2,
                                    round_from, round_to));
        }
    blend(cover_union(bars, clip_), pen.colour);
}

void Canvas::circle(const Vec2& centre, double radius, const Pen& pen) {
    const std::vector<Vec2> ring = disc_ring(centre * density_, radius * density_);
    std::vector<Vec2> points;
    for (const Vec2& corner : ring) points.push_back(corner / density_);
    polyline(points, pen, true);
}

void Canvas::text(const Vec2& at, std::string_view text, const TextStyle& style) {
    if (text.empty()) return;
    const bool upward = style.reading == Reading::upward;
    TextOutline outline = text_outline(text, style.size * density_, style.weight, 0.05);
    const double shift = style.align == Align::left     ? 0
                         : style.align == Align::centre ? outline.width / 2
                                                        : outline.width;
    const double drop =
        style.anchor == Anchor::baseline ? 0 : font_heights(style.size * density_).capital / 2;
    Vec2 start = device(at) + (upward ? Vec2{drop, shift} : Vec2{-shift, drop});
    // A baseline on whole pixels keeps the feet of the letters sharp.
    (upward ? start.x() : start.y()) = std::round(upward ? start.x() : start.y());
    for (std::vector<Vec2>& ring : outline.rings)
        for (Vec2& corner : ring) corner = start + (upward ? Vec2{corner.y(), -corner.x()} : corner);
    if (style.halo > 0) {
        std::vector<std::vector<Vec2>> bars;
        for (const std::vector<Vec2>& ring : outline.rings)
            for (std::size_t i = 0; i < ring.size(); ++i)
                bars.push_back(
                    bar_ring(ring[i], ring[(i + 1) % ring.size()], style.halo * density_, true, true));
        blend(cover_union(bars, clip_), style.halo_colour);
    }
    blend(cover(outline.rings, clip_), style.colour);
    labels_.push_back({.text = std::string(text), .box = text_box(at, text, style)});
}

PageBox text_box(const Vec2& at, std::string_view text, const TextStyle& style) {
    const FontHeights heights = font_heights(style.size);
    const double width = text_width(text, style.size, style.weight);
    const double left = style.align == Align::left ? 0 : style.align == Align::centre ? -width / 2 : -width;
    const double baseline = style.anchor == Anchor::baseline ? 0 : heights.capital / 2;
    const PageBox box{left, baseline - heights.ascent, left + width, baseline + heights.descent};
    if (style.reading == Reading::across)
        return {at.x() + box.left, at.y() + box.top, at.x() + box.right, at.y() + box.bottom};
    return {at.x() + box.top, at.y() - box.right, at.x() + box.bottom, at.y() - box.left};
}

}  // namespace glint
