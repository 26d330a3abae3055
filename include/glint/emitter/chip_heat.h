// The heat of a whole emitter chip: how emitters warm each other, and the temperatures that result.
#pragma once

#include <glint/core/vector.h>
#include <glint/emitter/heat.h>
#include <functional>
#include <span>
#include <variant>
#include <vector>

namespace glint {

/// Emitters whose places are points of one rectangular lattice along u and v: their coupling is a
/// convolution, done by FFT on an array of at least twice the lattice's size, so that no end meets the other.
struct LatticeCoupling {
    int rows = 0;
    int padded_columns = 0;
    int padded_rows = 0;
    std::vector<int> cell_of;  ///< [n] where each emitter sits in [rows x padded_columns]
    /// [padded_columns/2 + 1 x padded_rows] of the coupling [K/W]; real, as the coupling is even.
    std::vector<double> spectrum;
};

/// Emitters at any places, in square cells at least as wide as heat reaches; each pair within reach is
/// summed.
struct PairCoupling {
    std::vector<int> order;    ///< [n] emitters sorted by cell, row by row
    std::vector<Vec2> places;  ///< [n] of those [m]
    std::vector<int> first;    ///< [cells + 1] where each cell starts in `order`
    int columns = 1;           ///< of cells
    int rows = 1;
    double reach = 0;                             ///< of the farthest pair summed [m]
    double node_spacing = 0;                      ///< [m]; 0 on a half-space, where the product is constant
    std::vector<double> distance_times_coupling;  ///< at distances 0, 1, 2 ... node spacings [K m/W]
};

/// The coupling of every emitter of a chip with every other, made once and applied to any heats.
class HeatCoupling {
public:
    /// Positions [m], one at least, no two equal (Error otherwise); package resistance from the chip's far
    /// side to the heat sink [K/W]. Layouts are a lattice when every coordinate lies within 1e-6 steps of its
    /// points and the lattice has at most 16 points an emitter: grids, and hexagonal layouts, in half pitches
    /// by rows. Turned lattices and all others are summed pair by pair, in O(n^2) unless the chip is many
    /// thicknesses wide.
    HeatCoupling(const std::vector<Vec2>& positions, const Substrate& substrate,
                 double package_resistance = 0);

    /// Rise of each emitter [K] by the heat of all OTHERS through the substrate, and by the heat of all,
    /// itself included, through the package. Heat [n] in W. Good to 1e-9 of the greatest rise: on slabs a
    /// pair sum ends where less than 1e-9 of the rise on an even array lies beyond. Same bytes for any number
    /// of threads.
    [[nodiscard]] std::vector<double> rise_of(std::span<const double> heat) const;

    [[nodiscard]] std::size_t size() const { return size_; }
    [[nodiscard]] bool on_lattice() const { return std::holds_alternative<LatticeCoupling>(coupling_); }

private:
    std::size_t size_;
    double package_resistance_;
    std::variant<LatticeCoupling, PairCoupling> coupling_;
};

/// What surrounds the emitters of a chip, and when to stop looking for their temperatures.
struct ChipConditions {
    double sink_temperature = 298.15;  ///< [K]
    double self_resistance = 0;        ///< of each emitter, see self_resistance() [K/W]
    double top_temperature = 1000;     ///< hotter is taken for runaway [K]
    double tolerance = 1e-6;           ///< of the temperatures, as a share of the greatest rise
    int most_iterations = 10000;
};

/// Temperatures of a chip in balance with its heat.
struct ChipTemperatures {
    std::vector<double> temperature;  ///< [n] [K]
    std::vector<double> heat;         ///< [n] [W]
    int iterations = 0;               ///< how many times the heats were found
    bool settled = false;             ///< false when the heat runs away or no balance was found
};

/// Average heat [W] of an emitter at a temperature [K].
using HeatAt = std::function<double(std::size_t emitter, double temperature)>;

/// The lowest solution of T_i = T_sink + R_self q_i(T_i) + rise_of(q)_i, found from the cold side by plain
/// iteration. Lowest for certain when no heat falls with temperature. Slow only near runaway: n rounds leave
/// s^n of the rise, s being the share of a small warming that comes back through the heat it adds.
/// `heat_at` is called by one thread, emitter by emitter.
[[nodiscard]] ChipTemperatures solve_chip(const HeatCoupling& coupling, const HeatAt& heat_at,
                                          const ChipConditions& conditions);

/// Check of the sums: rise of each emitter of an endless square array per watt of each one's heat [K/W], on a
/// slab (thickness set), (1 - e)^1.5/(2 k d) + h/(k p^2), e = d sqrt(pi)/(2 p), with the substrate's k for
/// the emitter too (flux tube: Cooper, Mikic, Yovanovich 1969, from memory). Within 1 % of the sum over all
/// pairs for d <= p/3 and h >= p/2. Above it by 2.6 % at d = p/2 and h = p, by 4.4 % at d = p/2 and h = p/2,
/// by 5.5 % at d = 0.3 p and h = p/4.
[[nodiscard]] double endless_array_resistance(double diameter, double pitch, const Substrate& substrate);

}  // namespace glint
