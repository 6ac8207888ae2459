// Local derivative-free maximisation: the one door to NLopt.
//
// Points are plain vectors in an unbounded space; whoever calls maps them to element values. NLopt
// may forget its last evaluation when it stops, so the best point is kept here.
#pragma once

#include <cstdint>
#include <functional>
#include <span>
#include <vector>

namespace bandwright {

enum class LocalMethod {
  principal_axis,  // Brent 1973, for smooth objectives
  simplex,         // Nelder and Mead 1965 by subspaces (Rowan 1990), for kinked ones
};

struct LocalOptions {
  LocalMethod method = LocalMethod::principal_axis;
  double first_step = 0.1;        // same unit as the point
  double value_tolerance = 1e-3;  // stop when a step gains less than this
  int most_evaluations = 300;
  std::uint64_t seed = 0;
};

struct LocalBest {
  std::vector<double> point;
  double value = 0;
  int evaluations = 0;
};

using LocalObjective = std::function<double(const double* point)>;

// The best point seen from `start` on. A value that is not finite is never kept.
LocalBest maximise(const LocalObjective& objective, std::span<const double> start,
                   const LocalOptions& options);

// Writes `count` margins at `point`.
using LocalMargins = std::function<void(const double* point, double* margins)>;

// Maximises the least of `count` margins by linear models of each (Powell's COBYLA, 1994): slow
// steps, but a sharp end where the principal axes of a smooth stand-in no longer help.
LocalBest maximise_least(const LocalMargins& margins, int count, std::span<const double> start,
                         const LocalOptions& options);

}  // namespace bandwright
