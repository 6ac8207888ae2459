// Random numbers as a function of (seed, stream, index), with no state between calls.
//
// Counter-based numbers let any thread draw any sample, so results do not depend on how work was
// shared out. The mixing function is SplitMix64 (Steele, Lea and Flood, OOPSLA 2014); the maps to
// uniform and normal variates are our own because the standard library's differ between vendors.
#pragma once

#include <cstdint>

namespace bandwright {

// The SplitMix64 output function.
constexpr std::uint64_t mix64(std::uint64_t z) {
  z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9ull;
  z = (z ^ (z >> 27)) * 0x94D049BB133111EBull;
  return z ^ (z >> 31);
}

// A numbered sequence of independent draws; copying one copies its whole future.
class RandomStream {
 public:
  constexpr RandomStream(std::uint64_t seed, std::uint64_t stream)
      : base_(mix64(seed + kGolden) ^ mix64(stream * kGolden + 0x632BE59BD9B4E019ull)) {}

  // 64 uniform bits for draw number `index`.
  constexpr std::uint64_t bits(std::uint64_t index) const {
    return mix64(base_ + (index + 1) * kGolden);
  }
  // Uniform on [0, 1), 53 bits.
  constexpr double uniform(std::uint64_t index) const {
    return static_cast<double>(bits(index) >> 11) * 0x1.0p-53;
  }
  // Uniform on [-1, 1).
  constexpr double symmetric(std::uint64_t index) const { return 2.0 * uniform(index) - 1.0; }
  // Standard normal by inversion of the distribution function.
  double normal(std::uint64_t index) const;
  // A stream of its own for a sub-task.
  constexpr RandomStream fork(std::uint64_t stream) const { return RandomStream(base_, stream); }

 private:
  static constexpr std::uint64_t kGolden = 0x9E3779B97F4A7C15ull;
  std::uint64_t base_;
};

// Quantile function of the standard normal distribution (Wichura, Applied Statistics 37, 1988,
// algorithm AS 241), relative error about 1e-16. `p` must lie in (0, 1).
double normal_quantile(double p);

}  // namespace bandwright
