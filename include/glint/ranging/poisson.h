// Poisson counts: tails and thresholds.
#pragma once

namespace glint {

/// P(X >= k) for X Poisson with this mean; exact (regularised incomplete gamma). k >= 0, mean >= 0.
[[nodiscard]] double poisson_tail(int k, double mean);

/// Least k with P(X >= k) <= p for X Poisson with this mean, 0 < p < 1.
[[nodiscard]] int poisson_threshold(double mean, double p);

/// Least signal count s with P(X >= k) >= p for X Poisson with mean background + s; 0 when none is needed.
[[nodiscard]] double required_signal(int k, double background, double p);

}  // namespace glint
