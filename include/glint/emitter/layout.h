// Layouts: where the emitters sit, one function a kind.
#pragma once

#include <glint/core/vector.h>
#include <glint/design/design.h>
#include <filesystem>
#include <vector>

namespace glint {

/// Places in the FIELD's sense: u right, v up as the light is seen in the scene; centred on the chip; ordered
/// from the upper left, row by row. `zones` is filled only by a list that names them.
struct Places2d {
    std::vector<Vec2> positions;  ///< [n] [m]
    std::vector<int> zones;       ///< [n] or empty
    int rows = 0;                 ///< 0 when there is no raster
    int columns = 0;
};

[[nodiscard]] Places2d grid_layout(const Layout& layout);

/// Rows pitch * sqrt(3)/2 apart, odd rows shifted by half a pitch: every neighbour at the pitch.
[[nodiscard]] Places2d hexagonal_layout(const Layout& layout);

/// Random places with a least spacing, filled as densely as 30 tries a place allow (Bridson 2007).
/// Same seed, same places.
[[nodiscard]] Places2d scattered_layout(const Layout& layout);

/// A CSV file with a header row naming x_UNIT, y_UNIT (UNIT nm, um, mm or m) and, if wanted, zone.
[[nodiscard]] Places2d list_layout(const std::filesystem::path& file);

/// Smallest distance between two of the places [m]; 0 for fewer than two. O(n) with a cell grid.
[[nodiscard]] double nearest_distance(const std::vector<Vec2>& positions);

}  // namespace glint
