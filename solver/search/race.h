// All topologies of a problem under one budget.
//
// Every topology gets a few starts; then, round by round, more starts go to those whose best is
// near the leader's, and the rest wait. The leaders go on until their best was found again from
// independent starts. Rounds are barriers and each topology draws its own random numbers, so the
// outcome does not depend on the number of threads.
#pragma once

#include <cstdint>
#include <vector>

#include "solver/base/run_control.h"
#include "solver/rf/points.h"
#include "solver/rf/problem.h"

namespace bandwright {

struct SearchedTopology {
  int index = 0;  // into problem.topologies
  Values values;  // the best continuous ones
  double margin_db = 0;
  int agreeing_starts = 0;  // independent starts that ended in this optimum
  int starts = 0;
};

struct SearchOutcome {
  std::vector<SearchedTopology> ranked;  // best first; every topology that was reached
  std::uint64_t evaluations = 0;
  // The best was found again from at least two more independent starts.
  bool converged = false;
};

SearchOutcome search_topologies(const Problem& problem, const PointSet& points, int threads,
                                RunControl& control);

}  // namespace bandwright
