// In which order the zones of a frame fire.
#pragma once

#include <glint/design/design.h>
#include <glint/emitter/array.h>
#include <glint/emitter/heat.h>
#include <span>
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
/// - best: the smallest sum of the scores of OrderScore with the weights of the firing, found from all orders
///   above, some strides, and seeded swaps; no worse than any of these. Same seed, same order. A matrix that
///   fires several zones at once takes the best of these orders whose sets it can fire, without swaps.
/// The substrate and the addressing matter for best only.
/// Errors: serpentine when the zones form no raster, best for more than 16384 zones.
[[nodiscard]] std::vector<int> order_zones(const Firing& firing, const EmitterArray& array,
                                           const Substrate& substrate = {},
                                           AddressingScheme scheme = AddressingScheme::individual);

/// Whether a row-by-column matrix of this many columns, >= 1, can fire these zones and no other: it drives
/// the crossings of some row lines with some column lines, so they must be exactly such a product.
[[nodiscard]] bool matrix_can_fire(std::span<const int> zones, int columns);

}  // namespace glint
