// The scattered layout: random places with a least spacing.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/quantity.h>
#include <glint/core/samples.h>
#include <glint/emitter/layout.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>

namespace glint {
namespace {

constexpr int tries_a_place = 30;  // Bridson 2007

// Background cells of side spacing / sqrt(2) hold at most one place each.
struct Cells {
    double side;
    int columns, rows;
    std::vector<int> place;  // index of the place in a cell, -1 when empty

    Cells(double width, double height, double spacing)
        : side(spacing / std::sqrt(2.0)),
          columns(static_cast<int>(width / side) + 1),
          rows(static_cast<int>(height / side) + 1),
          place(static_cast<std::size_t>(columns) * rows, -1) {}

    [[nodiscard]] int column(const Vec2& p) const {
        return std::min(columns - 1, static_cast<int>(p.x() / side));
    }
    [[nodiscard]] int row(const Vec2& p) const { return std::min(rows - 1, static_cast<int>(p.y() / side)); }
    [[nodiscard]] int& at(int r, int c) { return place[static_cast<std::size_t>(r) * columns + c]; }

    [[nodiscard]] bool free(const Vec2& p, const std::vector<Vec2>& positions, double spacing) {
        const int r = row(p), c = column(p);
        for (int y = std::max(0, r - 2); y <= std::min(rows - 1, r + 2); ++y)
            for (int x = std::max(0, c - 2); x <= std::min(columns - 1, c + 2); ++x)
                if (const int other = at(y, x); other >= 0 && (positions[other] - p).norm() < spacing)
                    return false;
        return true;
    }
};

}  // namespace

Places2d scattered_layout(const Layout& layout) {
    const double width = layout.width, height = layout.height, spacing = layout.spacing;
    if (width * height / (spacing * spacing) > 4e6)
        throw Error(
            Problem{.what = "the area holds millions of emitters at this spacing",
                    .accepted = fmt::format("a spacing of at least {}",
                                            show_quantity(std::sqrt(width * height / 4e6), Kind::length)),
                    .path = "emitters/layout/spacing"});
    RandomStream random(static_cast<std::uint64_t>(layout.seed));
    Cells cells(width, height, spacing);
    Places2d places;
    std::vector<int> active;
    const auto keep = [&](const Vec2& p) {
        cells.at(cells.row(p), cells.column(p)) = static_cast<int>(places.positions.size());
        active.push_back(static_cast<int>(places.positions.size()));
        places.positions.push_back(p);
    };
    const double first_u = random.uniform() * width;
    keep({first_u, random.uniform() * height});
    while (!active.empty()) {
        const std::size_t pick = random.below(active.size());
        const Vec2 centre = places.positions[active[pick]];
        bool found = false;
        for (int attempt = 0; attempt < tries_a_place && !found; ++attempt) {
            // Uniform over the annulus from one to two spacings.
            const double radius = spacing * std::sqrt(1 + 3 * random.uniform());
            const double angle = 2 * pi * random.uniform();
            const Vec2 p = centre + radius * Vec2(std::cos(angle), std::sin(angle));
            if (p.x() < 0 || p.x() > width || p.y() < 0 || p.y() > height) continue;
            if (cells.free(p, places.positions, spacing)) keep(p), found = true;
        }
        if (!found) active[pick] = active.back(), active.pop_back();
    }
    for (Vec2& p : places.positions) p -= Vec2(width / 2, height / 2);
    std::ranges::sort(places.positions, [](const Vec2& a, const Vec2& b) {
        return a.y() != b.y() ? a.y() > b.y() : a.x() < b.x();
    });
    return places;
}

}  // namespace glint
