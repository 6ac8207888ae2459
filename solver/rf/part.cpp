#include "solver/rf/part.h"

#include <algorithm>
#include <cmath>
#include <iterator>
#include <limits>

namespace bandwright {

double QualityFactor::at(double frequency_hz) const {
  return value * std::pow(frequency_hz / at_hz, exponent);
}

std::vector<double> offered_values(const Part& part, double min, double max) {
  if (const Series* series = std::get_if<Series>(&part.values)) {
    min = std::max(min, std::numeric_limits<double>::min());
    if (!(min <= max)) return {};
    return preferred_values(*series, min, max);
  }
  std::vector<double> offered;
  if (const auto* list = std::get_if<std::vector<double>>(&part.values)) {
    std::copy_if(list->begin(), list->end(), std::back_inserter(offered),
                 [&](double value) { return value >= min && value <= max; });
    std::sort(offered.begin(), offered.end());
    offered.erase(std::unique(offered.begin(), offered.end()), offered.end());
  }
  return offered;
}

}  // namespace bandwright
