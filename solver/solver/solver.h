// The two things the engine does: solve a problem, and analyse a given network.
#pragma once

#include "solver/base/run_control.h"
#include "solver/rf/problem.h"
#include "solver/solver/report.h"

namespace bandwright {

// Searches every topology of `problem`, chooses buyable values, estimates yield and ranks.
//
// Deterministic: the same problem gives the same report for any number of `threads`, unless
// `control` ends the run early (then `reproducible` is false).
// Never throws for a problem that holds its invariants.
Report solve(const Problem& problem, int threads, RunControl& control);

struct SweepRange {
  double from_hz = 0;
  double to_hz = 0;
  int points = 201;  // 2 or more
};

// Everything known of one given network: `problem.topologies[0]` with `values`. The response table
// covers `sweep`, which must lie inside the data. Same keys as one design of `solve()`.
Design analyse(const Problem& problem, const Values& values, const SweepRange& sweep, int threads);

}  // namespace bandwright
