// Comparison of numbers that are close, by their relative difference only.
#pragma once

#include <doctest/doctest.h>

/// doctest's Approx adds 1 to its scale, so that any two numbers far below 1 compare equal. This one does
/// not: about(x).epsilon(e) holds within e of the larger of the two; 1.2e-5 when no epsilon is given.
inline doctest::Approx about(double value) { return doctest::Approx(value).scale(1e-200); }
