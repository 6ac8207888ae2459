// The search's coordinates: the natural logarithm of every free value.
//
// Local methods run without bounds. A point outside the ranges is evaluated at the nearest point
// inside and pays a penalty that grows with the square of the distance, so that an optimum on the
// edge is found and the way back is smooth.
#pragma once

#include <vector>

#include "solver/rf/topology.h"

namespace bandwright {

class LogSpace {
 public:
  explicit LogSpace(const Topology& topology);

  int dimension() const { return static_cast<int>(free_.size()); }
  double lower(int i) const { return lower_[i]; }
  double upper(int i) const { return upper_[i]; }

  // Fills `values` (one for each slot) from `point`; returns the penalty in dB.
  double to_values(const double* point, double* values) const;
  Values values(const std::vector<double>& point) const;
  std::vector<double> point(const Values& values) const;

 private:
  std::vector<int> free_;  // slot of each coordinate
  std::vector<double> lower_, upper_;
  std::vector<ValueRange> ranges_;
  Values fixed_;  // one for each slot
};

}  // namespace bandwright
