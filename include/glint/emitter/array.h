// The emitter array: places on the chip and the zones they are wired to.
#pragma once

#include <glint/core/vector.h>
#include <glint/design/design.h>
#include <filesystem>
#include <string>
#include <vector>

namespace glint {

/// Whether the optics turn the chip's picture over. A lens does; a bare chip or a diffuser alone does not.
enum class FieldSense { upright, inverted };

/// Every emitter and its zone. Emitters and zones count from the upper left of the FIELD, row by row, from 0.
struct EmitterArray {
    std::vector<Vec2> positions;  ///< [n] on the chip, u right and v up seen from behind the module [m]
    std::vector<int> zone_of;     ///< [n] zone of each emitter
    int zones = 0;
    int zone_rows = 0;     ///< zones form a raster of this many rows; 0 when they form none
    int zone_columns = 0;  ///< and columns
    int rows = 0;          ///< rows of emitters, 0 when they form no raster
    int columns = 0;       ///< emitters in a row
    /// [n] peak power over the design's, mean 1; empty while all emitters are taken to send the same.
    std::vector<double> relative_power;

    [[nodiscard]] double power_of(std::size_t emitter) const {
        return relative_power.empty() ? 1 : relative_power[emitter];
    }
    [[nodiscard]] std::size_t size() const { return positions.size(); }
};

/// The emitters of each zone, one after the other.
struct ZoneMembers {
    std::vector<int> first;    ///< [zones + 1] where the zone's emitters start in `members`
    std::vector<int> members;  ///< [n] emitter indices

    [[nodiscard]] int count(int zone) const { return first[zone + 1] - first[zone]; }
};
[[nodiscard]] ZoneMembers members_of(const EmitterArray& array);

/// How closely the emitters sit, common practice of chip layout.
struct Packing {
    double area = 0;     ///< chip area that belongs to the emitters [m2]
    double density = 0;  ///< emitters per area [1/m2]
    double fill = 0;     ///< share of the area that emits: N pi d^2 / (4 A)
    double nearest = 0;  ///< smallest distance of two emitters [m]; 0 for a single one
};

/// Places the emitters and wires the zones. Relative list files are looked up in `folder`.
/// Errors: list file (missing, no rows, bad numbers, equal places), a scattered area that holds no emitter,
/// emitters that overlap, more than 4 million emitters.
[[nodiscard]] EmitterArray build_array(const Emitters& emitters, FieldSense sense,
                                       const std::filesystem::path& folder);

/// Density and fill. For grids each emitter owns one cell of pitch by row pitch; hexagonal rows are
/// pitch * sqrt(3)/2 apart; otherwise the area is that of the layout, or of the bounding rectangle of a list.
[[nodiscard]] Packing packing(const Emitters& emitters, const EmitterArray& array);

/// The chosen sense of the field: inverted when the optics hold a lens.
[[nodiscard]] FieldSense field_sense(const Optics& optics);

}  // namespace glint
