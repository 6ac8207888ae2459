// The confidence interval of a share counted in independent trials (Wilson, J. Am. Stat. Assoc.
// 22, 1927): the proportions p with |successes/trials - p| <= z sqrt(p (1 - p) / trials).
//
// It stays inside [0, 1] and keeps its width when all trials agree, where the textbook interval
// shrinks to a point. It does not hold for quasi-random points, nor for the best of several
// designs scored on the same samples.
#pragma once

#include <cstdint>

namespace bandwright {

struct Interval {
  double low = 0;
  double high = 0;
};

// Precondition: 0 <= successes <= trials and trials > 0. The default z is for 95 % confidence.
Interval wilson_interval(std::int64_t successes, std::int64_t trials, double z = 1.959963984540054);

}  // namespace bandwright
