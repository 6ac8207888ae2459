#include "solver/search/log_space.h"

#include <algorithm>
#include <cmath>

namespace bandwright {
namespace {

constexpr double kPenaltyDbPerSquare = 20;

}  // namespace

LogSpace::LogSpace(const Topology& topology) {
  for (std::size_t i = 0; i < topology.slots.size(); ++i) {
    const ValueRange& range = topology.slots[i].range;
    fixed_.push_back(range.min);
    if (range.fixed()) continue;
    free_.push_back(static_cast<int>(i));
    lower_.push_back(std::log(range.min));
    upper_.push_back(std::log(range.max));
    ranges_.push_back(range);
  }
}

double LogSpace::to_values(const double* point, double* values) const {
  std::copy(fixed_.begin(), fixed_.end(), values);
  double penalty = 0;
  for (std::size_t i = 0; i < free_.size(); ++i) {
    const double inside = std::clamp(point[i], lower_[i], upper_[i]);
    const double outside = point[i] - inside;
    penalty += outside * outside;
    values[free_[i]] = std::clamp(std::exp(inside), ranges_[i].min, ranges_[i].max);
  }
  return kPenaltyDbPerSquare * penalty;
}

Values LogSpace::values(const std::vector<double>& point) const {
  Values out(fixed_.size());
  to_values(point.data(), out.data());
  return out;
}

std::vector<double> LogSpace::point(const Values& values) const {
  std::vector<double> out;
  for (int slot : free_) out.push_back(std::log(values[slot]));
  return out;
}

}  // namespace bandwright
