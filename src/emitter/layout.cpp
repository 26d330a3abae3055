// Grid and hexagonal layouts, and the nearest distance of any layout.
#include <glint/emitter/layout.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace glint {
namespace {

Places2d raster(int rows, int columns, double pitch, double row_pitch, double odd_shift) {
    Places2d places{.rows = rows, .columns = columns};
    places.positions.reserve(static_cast<std::size_t>(rows) * columns);
    // The shift of odd rows moves the middle of the raster by a quarter of the shift on either side.
    const double centre_u = ((columns - 1) * pitch + (rows > 1 ? odd_shift : 0)) / 2;
    const double centre_v = (rows - 1) * row_pitch / 2;
    for (int r = 0; r < rows; ++r)
        for (int c = 0; c < columns; ++c)
            places.positions.emplace_back(c * pitch + (r % 2 == 1 ? odd_shift : 0) - centre_u,
                                          centre_v - r * row_pitch);
    return places;
}

}  // namespace

Places2d grid_layout(const Layout& layout) {
    return raster(layout.rows, layout.columns, layout.pitch, layout.row_pitch.value_or(layout.pitch), 0);
}

Places2d hexagonal_layout(const Layout& layout) {
    return raster(layout.rows, layout.columns, layout.pitch, layout.pitch * std::sqrt(3.0) / 2,
                  layout.pitch / 2);
}

double nearest_distance(const std::vector<Vec2>& positions) {
    if (positions.size() < 2) return 0;
    Vec2 low = positions.front(), high = low;
    for (const Vec2& p : positions) low = low.cwiseMin(p), high = high.cwiseMax(p);
    // One emitter a cell on average; a search ring grows until it cannot hold anything nearer.
    const Vec2 size = (high - low).cwiseMax(1e-12);
    const double cell = std::max({std::sqrt(size.x() * size.y() / static_cast<double>(positions.size())),
                                  size.maxCoeff() / static_cast<double>(positions.size()), 1e-12});
    const int columns = static_cast<int>(size.x() / cell) + 1, rows = static_cast<int>(size.y() / cell) + 1;
    std::vector<std::vector<int>> cells(static_cast<std::size_t>(columns) * rows);
    const auto column_of = [&](const Vec2& p) {
        return std::min(columns - 1, static_cast<int>((p.x() - low.x()) / cell));
    };
    const auto row_of = [&](const Vec2& p) {
        return std::min(rows - 1, static_cast<int>((p.y() - low.y()) / cell));
    };
    for (std::size_t i = 0; i < positions.size(); ++i)
        cells[static_cast<std::size_t>(row_of(positions[i])) * columns + column_of(positions[i])].push_back(
            static_cast<int>(i));
    double nearest = std::numeric_limits<double>::infinity();
    for (std::size_t i = 0; i < positions.size(); ++i) {
        const int r = row_of(positions[i]), c = column_of(positions[i]);
        for (int ring = 0; ring <= std::max(rows, columns) && (ring - 1) * cell < nearest; ++ring)
            for (int y = std::max(0, r - ring); y <= std::min(rows - 1, r + ring); ++y)
                for (int x = std::max(0, c - ring); x <= std::min(columns - 1, c + ring); ++x) {
                    if (std::max(std::abs(y - r), std::abs(x - c)) != ring) continue;
                    for (const int j : cells[static_cast<std::size_t>(y) * columns + x])
                        if (j != static_cast<int>(i))
                            nearest = std::min(nearest, (positions[i] - positions[j]).norm());
                }
    }
    return nearest;
}

}  // namespace glint
