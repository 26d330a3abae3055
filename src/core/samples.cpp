// Low-discrepancy samples and seeded random numbers.
#include <glint/core/constants.h>
#include <glint/core/samples.h>

#include <cmath>

namespace glint {

std::uint64_t RandomStream::bits() {
    std::uint64_t z = (state_ += 0x9E3779B97F4A7C15ull);
    z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9ull;
    z = (z ^ (z >> 27)) * 0x94D049BB133111EBull;
    return z ^ (z >> 31);
}

double RandomStream::uniform() { return static_cast<double>(bits() >> 11) * 0x1.0p-53; }

std::uint64_t RandomStream::below(std::uint64_t n) {
    return static_cast<std::uint64_t>(uniform() * static_cast<double>(n));
}

Vec2 r2_point(std::uint32_t index, const Vec2& shift) {
    // 1/g and 1/g^2 with g the real root of g^3 = g + 1.
    constexpr double a1 = 0.7548776662466927, a2 = 0.5698402909980532;
    const double x = shift.x() + a1 * index, y = shift.y() + a2 * index;
    return {x - std::floor(x), y - std::floor(y)};
}

Vec2 shift_of(std::uint64_t seed, std::uint64_t item) {
    RandomStream stream(seed * 0xD1342543DE82EF95ull + item);
    const double x = stream.uniform();
    return {x, stream.uniform()};
}

Vec2 square_to_disc(const Vec2& unit_square) {
    const double a = 2 * unit_square.x() - 1, b = 2 * unit_square.y() - 1;
    if (a == 0 && b == 0) return {0, 0};
    const bool wide = std::abs(a) > std::abs(b);
    const double radius = wide ? a : b;
    const double angle = wide ? pi / 4 * (b / a) : pi / 2 - pi / 4 * (a / b);
    return {radius * std::cos(angle), radius * std::sin(angle)};
}

Vec2 square_to_gaussian(const Vec2& unit_square) {
    // Power inside radius r is 1 - exp(-2 r^2); the disc radius squared is uniform in [0, 1].
    const Vec2 disc = square_to_disc(unit_square);
    const double share = disc.squaredNorm();
    if (share == 0) return {0, 0};
    const double radius = std::sqrt(-0.5 * std::log1p(-std::min(share, 1 - 1e-12)));
    return disc * (radius / std::sqrt(share));
}

}  // namespace glint
