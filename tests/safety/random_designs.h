// Random small designs of every kind, the same for the same seed.
#pragma once

#include <glint/design/design.h>

#include <cstdint>

namespace glint::test {

/// A design with up to 64 emitters and 64 pulses a frame: any layout without a file, addressing, firing order
/// and optics; 400 nm to 1350 nm, pulses of 0.5 ns to 300 us. A few cannot be built.
[[nodiscard]] Design random_design(std::uint64_t seed);

}  // namespace glint::test
