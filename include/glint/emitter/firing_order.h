// In which order the zones of a frame fire.
#pragma once

#include <glint/design/design.h>
#include <glint/emitter/array.h>
#include <vector>

namespace glint {

/// Every zone once, in firing order:
/// - raster: 0, 1, 2, ...
/// - serpentine: row by row, every other row of zones from right to left.
/// - stride: 0, s, 2s, ..., then 1, 1+s, ..., for s = `stride` >= 1.
/// - bit_reversed: 0, 1, 2, ... with their bits reversed (van der Corput 1935), as many bits as the highest
///   zone needs; numbers that are no zone are left out.
/// - farthest_next: zone 0, then each time the zone whose middle is farthest from the nearest one of all
/// zones
///   fired so far (farthest-point ordering: Gonzalez 1985). A middle is the mean place of a zone's emitters.
///   Distances that differ by less than 1e-9 of the span of the middles are equal; the lowest number goes
///   first.
/// - shuffled: every order equally likely (Fisher, Yates), drawn from `seed`. Same seed, same order.
/// Error: serpentine when the zones form no raster.
[[nodiscard]] std::vector<int> order_zones(const Firing& firing, const EmitterArray& array);

}  // namespace glint
