// The frequency grids of one run, each a refinement of the one searched on.
#pragma once

#include "solver/rf/points.h"

namespace bandwright {

// Points between the edges of each band for the search; every other grid divides its intervals.
// Wide bands get more: one set of intervals for each octave.
int search_intervals(const Goal& goal);

// Each search interval divided in `refine` parts, edges included.
GoalGrid goal_grid(const std::vector<Goal>& goals, int refine);

inline constexpr int kBoardRefine = 2;    // Monte Carlo
inline constexpr int kPolishRefine = 4;   // the end of the continuous search
inline constexpr int kChoiceRefine = 10;  // margins that choose between preferred values
inline constexpr int kCheckRefine = 40;   // the margins that are reported

}  // namespace bandwright
