// Poisson counts: tails and thresholds.
#include <glint/ranging/poisson.h>

#include <algorithm>
#include <cmath>
#include <unsupported/Eigen/SpecialFunctions>

namespace glint {

double poisson_tail(int k, double mean) {
    if (k <= 0) return 1;
    if (mean <= 0) return 0;
    return std::clamp(Eigen::numext::igamma(static_cast<double>(k), mean), 0.0, 1.0);
}

int poisson_threshold(double mean, double p) {
    // Start from the Gaussian tail at a typical p and walk; the tail falls with k.
    int k = std::max(1, static_cast<int>(std::ceil(mean + 4 * std::sqrt(mean))));
    while (k > 1 && poisson_tail(k - 1, mean) <= p) --k;
    while (poisson_tail(k, mean) > p) ++k;
    return k;
}

double required_signal(int k, double background, double p) {
    if (poisson_tail(k, background) >= p) return 0;
    double low = 0, high = std::max(10.0, 2.0 * k);
    while (poisson_tail(k, background + high) < p) high *= 2;
    // 50 halvings of a span of a few times the answer: at the resolution of a double.
    for (int i = 0; i < 50; ++i) {
        const double middle = (low + high) / 2;
        (poisson_tail(k, background + middle) < p ? low : high) = middle;
    }
    return high;
}

}  // namespace glint
