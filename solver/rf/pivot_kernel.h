// For which values of one element do all goals hold? The question of the discrete search.
//
// With every other element fixed, the reflection's numerator N and denominator D at the source are
// squared magnitudes of functions linear in the pivot's factor x, so a goal at one frequency,
// wN N(x) + wD D(x) + w0 S(x) <= 0, is a quadratic inequality: an interval of x when it is convex.
// The intersection over all points holds every x that is good enough, found without trying any.
// (S is 1, or the square of the pivot's impedance when everything was multiplied by it.)
#pragma once

#include "solver/rf/ladder_kernel.h"

namespace bandwright {

// Voltage and current at one position of the ladder, at every point.
struct StateArrays {
  double* voltage_re = nullptr;
  double* voltage_im = nullptr;
  double* current_re = nullptr;
  double* current_im = nullptr;
};

struct PivotTask {
  KernelStep pivot;  // the element next to the source
  int points = 0;    // a multiple of kLanes
  const double *source_re = nullptr, *source_im = nullptr;
  const double *weight_n = nullptr, *weight_d = nullptr, *weight_0 = nullptr;
};

struct FactorInterval {
  double low = 0;
  double high = 0;
  bool empty() const { return !(low <= high); }
};

// `to` = `from` with one more element.
void advance_state(const KernelStep& step, double x, const StateArrays& from, const StateArrays& to,
                   int points);

// The smallest interval known to hold every positive pivot factor that meets all points, when the
// element `step` with factor `x` (null: none) stands between `state` and the pivot. Points whose
// condition is not convex do not narrow it. Widened by a few parts in 1e9 against rounding.
FactorInterval pivot_interval(const PivotTask& task, const KernelStep* step, double x,
                              const StateArrays& state);

}  // namespace bandwright
