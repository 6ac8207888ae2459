// The best preferred values of one topology: a real discrete search, not rounding.
//
// All values but one are enumerated, from the load to the source; for the element next to the
// source the interval of values that beat the best so far is computed (pivot_kernel.h), so its
// list is never tried through. The result is that of exhaustive enumeration while the product of
// the other lists stays under a limit (3 values of E192, 4 of E24); beyond, each list is cut to the
// values nearest the continuous optimum. Elements that can have any value stay at the optimum
// during the enumeration and are then fitted to each of the best combinations.
#pragma once

#include <cstdint>
#include <vector>

#include "solver/base/run_control.h"
#include "solver/rf/points.h"
#include "solver/rf/topology.h"

namespace bandwright {

// A goal grid in an order in which a few points already cover each band.
GoalGrid spread_order(const GoalGrid& grid);

struct Choice {
  Values values;
  double margin_db = 0;
};

struct DiscreteOutcome {
  std::vector<Choice> best;  // best first, at most `keep`, margins on the fine points
  bool exact = true;         // equal to exhaustive enumeration (ended early or cut: false)
  std::uint64_t evaluations = 0;
};

// `screen` must be made of the fine points' frequencies, in spread order. Choices with a margin at
// or below `floor_db` are not wanted. `ideal` holds the continuous optimum.
DiscreteOutcome choose_values(const Topology& topology, const Values& ideal, const PointSet& screen,
                              const PointSet& fine, double floor_db, int keep, std::uint64_t seed,
                              RunControl& control);

}  // namespace bandwright
