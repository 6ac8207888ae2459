// What one core can do at most: fused multiply-adds on registers alone, with the instruction set
// that the ladder kernel uses.
#pragma once

#include <cstdint>

namespace bandwright::benchmark_cases {

// Runs `rounds` rounds of independent multiply-adds; returns the number of floating-point
// operations done, two for each multiply-add and lane.
std::uint64_t multiply_add(std::uint64_t rounds);

}  // namespace bandwright::benchmark_cases
