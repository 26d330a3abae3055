// How well a scattered layout serves as a pattern of projected dots.
#pragma once

#include <glint/core/vector.h>
#include <limits>
#include <vector>

namespace glint {

/// How a camera beside the projector looks for a dot again: it compares the neighbourhood of the dot with
/// those along the epipolar line, the line in the pattern along which a dot moves with the distance of what
/// it hits. Lengths are those of the chip.
struct DotSearch {
    double window_width = 0;   ///< of a neighbourhood along the line, centred on its dot [m], > 0
    double window_height = 0;  ///< across the line [m], > 0
    Vec2 line = {1, 0};        ///< unit vector along the epipolar line
    double search_length =
        std::numeric_limits<double>::infinity();  ///< farthest along the line, either way [m]
    /// Dots this close count as the same, and so do lines [m]; > 0, less than half the smallest spacing.
    double tolerance = 0;
    /// A dot is unique when every other neighbourhood correlates by less. Common practice of window matching,
    /// from memory, no source.
    double unique_below = 0.7;
};

/// A pattern judged. Spacings are 0 for fewer than two dots.
struct DotPattern {
    double nearest = 0;       ///< smallest spacing [m]
    double mean_nearest = 0;  ///< mean over the dots of the spacing to the nearest other [m]
    /// Dots per area inside the pattern [1/m2]: every dot weighted by cos2 from 1 in the middle of the
    /// bounding rectangle to 0 at its edges (von Hann's window), over the integral of the weights. So rows
    /// along the edges do not count: exact for square grids, for others where many dots fill a rectangle. 0
    /// unless there are dots inside the rectangle.
    double density = 0;
    double share_of_hexagonal = 0;  ///< density over that of a hexagonal lattice, 2/(sqrt3 nearest^2)
    double uniqueness = 0;          ///< share of the dots that are unique; 0 without dots
    double worst_correlation = 0;   ///< largest of two neighbourhoods on one line; 0 without such
};

/// Judges dots at `positions` [n] [m], finite. A neighbourhood is the dots of the window, the one in its
/// middle with them. The correlation of two, each seen from its middle, is n_same / sqrt(n_1 n_2): dots that
/// coincide within the tolerance over the geometric mean of the numbers of dots; 1 for equal ones.
/// Neighbourhoods at the edges are compared as they are, with nothing beyond. Time grows with dots * dots on
/// a line * dots in a window. Errors: a window without area, a line that is no unit vector, a tolerance out
/// of its range.
[[nodiscard]] DotPattern judge_dots(const std::vector<Vec2>& positions, const DotSearch& search);

}  // namespace glint
