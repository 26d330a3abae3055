// Quadrature: integrals of smooth functions over an interval.
#pragma once

namespace glint {

/// Integral of f over [low, high] by Gauss-Legendre, 5 points on each of `pieces` equal parts: exact to the
/// ninth degree on each (Abramowitz and Stegun, table 25.4).
template <class F>
[[nodiscard]] double integral(double low, double high, int pieces, const F& f) {
    constexpr double node[] = {0, 0.538469310105683, 0.906179845938664};
    constexpr double weight[] = {0.568888888888889, 0.478628670499366, 0.236926885056189};
    const double half = (high - low) / (2 * pieces);
    double sum = 0;
    for (int i = 0; i < pieces; ++i) {
        const double middle = low + (2 * i + 1) * half;
        sum += weight[0] * f(middle);
        for (int k = 1; k < 3; ++k)
            sum += weight[k] * (f(middle - half * node[k]) + f(middle + half * node[k]));
    }
    return sum * half;
}

}  // namespace glint
