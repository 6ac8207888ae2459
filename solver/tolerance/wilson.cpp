#include "solver/tolerance/wilson.h"

#include <algorithm>
#include <cmath>

namespace bandwright {

Interval wilson_interval(std::int64_t successes, std::int64_t trials, double z) {
  const double n = static_cast<double>(trials);
  const double p = static_cast<double>(successes) / n;
  const double spread = z * z / n;
  const double centre = (p + spread / 2) / (1 + spread);
  const double half = z * std::sqrt(p * (1 - p) / n + spread / (4 * n)) / (1 + spread);
  // At the ends the bound is 0 or 1 exactly; rounding must not move it.
  return {successes == 0 ? 0.0 : std::max(0.0, centre - half),
          successes == trials ? 1.0 : std::min(1.0, centre + half)};
}

}  // namespace bandwright
