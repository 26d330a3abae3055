// How good a firing order is for heat and eyes, and the search for a better one.
#pragma once

#include <glint/core/vector.h>
#include <glint/design/design.h>
#include <glint/emitter/array.h>
#include <glint/emitter/heat.h>
#include <span>
#include <vector>

namespace glint {

/// The mean place of each zone's emitters [zones], on the chip [m].
[[nodiscard]] std::vector<Vec2> zone_middles(const EmitterArray& array);

/// What is wrong with a firing order, three numbers without unit; the smaller the better. The frame repeats:
/// the first dwell follows the last one. All zones count as alike, and distances are those of their middles.
/// The neighbour distance p is the median over the zones of the distance to the nearest middle elsewhere
/// (more than 1e-9 of the diagonal D of the rectangle about the middles away).
struct OrderScore {
    /// How near to each other zones fire: 1 - (mean distance)/D over all pairs of zones that fire in one
    /// dwell or in successive ones. From 0 to 1; 0 when all middles coincide or there is no pair.
    double spacing = 0;
    /// The largest rise that other zones leave at a zone at the end of its dwell, over the rise by its own
    /// dwell: the largest over zones of
    ///     sum (Z(r, t + l) - Z(r, t)) / Z0(l),
    /// l the length of a dwell, t the time since the end of the other zone's latest dwell (0 for those that
    /// fire together), r the distance, at least p/2, Z = point_step() and Z0 = centre_step() of a disc of
    /// diameter p. The heat of a dwell counts as even over its length. The sum goes back as many dwells n as
    /// leave at least 1 % of what the worst one leaves at the distance p, at most one round of the frame, and
    /// at most 256/(zones at once) dwells. 0 when all middles coincide.
    double heat = 0;
    /// How the energy of nearby zones piles up, a STAND-IN for the criterion of eye safety for pulse trains
    /// and averages; only the safety room gives the ratio to the limit. The largest over zones and over
    /// stretches of k successive dwells, k = 1, 2, 4, ... and all, of
    ///     sum w(r) / (T/l)^0.75,
    /// over the zones that fire in the stretch, T its length from its first shot to after its last and l that
    /// of one dwell; w = (exp(-(r/2p)^2) - exp(-4))/(1 - exp(-4)), 0 from r = 4 p on. One zone alone gives 1:
    /// at least 1. The exponent is that of the thermal limits (IEC 60825-1).
    double exposure = 0;
};

/// The scores of an order, every zone once. Takes zones at once, shots, repetition, gap and frame period of
/// the firing; the pulse width cancels. Middles [zones] in metres.
[[nodiscard]] OrderScore score_order(std::span<const int> order, const Firing& firing,
                                     const std::vector<Vec2>& middles, const Substrate& substrate);

/// The sum of the scores with the weights of the firing.
[[nodiscard]] double weighted(const OrderScore& score, const Firing& firing);

/// Takes the one of some orders, at least one, that has the smallest weighted sum (the first of equal ones),
/// tries that many swaps of two zones, drawn from `seed` of the firing, and returns the best order met. Never
/// worse than any of the orders given. Same seed, same order.
[[nodiscard]] std::vector<int> best_order(const std::vector<std::vector<int>>& orders, const Firing& firing,
                                          const std::vector<Vec2>& middles, const Substrate& substrate,
                                          int tries);

}  // namespace glint
