// Low-discrepancy samples and seeded random numbers; every work item can rebuild its own stream.
#pragma once

#include <glint/core/vector.h>
#include <cstdint>

namespace glint {

/// A seeded stream of random bits (SplitMix64: Steele, Lea, Flood 2014). Same seed, same stream, everywhere.
class RandomStream {
public:
    explicit RandomStream(std::uint64_t seed) : state_(seed) {}
    [[nodiscard]] std::uint64_t bits();
    [[nodiscard]] double uniform();                      ///< in [0, 1)
    [[nodiscard]] std::uint64_t below(std::uint64_t n);  ///< uniform in 0..n-1, n >= 1

private:
    std::uint64_t state_;
};

/// Point `index` of the two-dimensional R2 sequence (Roberts 2018), shifted by `shift` modulo 1; in [0, 1)^2.
[[nodiscard]] Vec2 r2_point(std::uint32_t index, const Vec2& shift);

/// A shift in [0, 1)^2 that belongs to one work item of one seed.
[[nodiscard]] Vec2 shift_of(std::uint64_t seed, std::uint64_t item);

/// Centre-concentric map of the unit square onto the unit disc, area preserving (Shirley, Chiu 1997).
[[nodiscard]] Vec2 square_to_disc(const Vec2& unit_square);

/// A point of the unit square as a point of a two-dimensional Gaussian with 1/e2 radius 1 in both directions.
/// Area preserving in probability; the tail ends where the square does.
[[nodiscard]] Vec2 square_to_gaussian(const Vec2& unit_square);

}  // namespace glint
