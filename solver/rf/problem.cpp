#include "solver/rf/problem.h"

#include <cmath>

namespace bandwright {

double centre_frequency_hz(const std::vector<Goal>& goals) {
  double logarithms = 0;
  for (const Goal& goal : goals) logarithms += std::log(goal.from_hz) + std::log(goal.to_hz);
  return std::exp(logarithms / (2.0 * static_cast<double>(goals.size())));
}

double source_resistance_ohm(const OnePort& source, double frequency_hz) {
  return source.impedance_ohm(frequency_hz).real();
}

}  // namespace bandwright
