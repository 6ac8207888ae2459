#include "solver/solver/grids.h"

#include <algorithm>
#include <cmath>

namespace bandwright {
namespace {

constexpr int kIntervalsPerOctave = 32;
constexpr int kMostIntervals = 256;

}  // namespace

int search_intervals(const Goal& goal) {
  if (goal.from_hz == goal.to_hz) return 0;
  const int octaves = static_cast<int>(std::ceil(std::log2(goal.to_hz / goal.from_hz)));
  return std::min(kMostIntervals, kIntervalsPerOctave * std::max(1, octaves));
}

GoalGrid goal_grid(const std::vector<Goal>& goals, int refine) {
  GoalGrid grid;
  for (const Goal& goal : goals) {
    grid.push_back(even_grid({goal}, search_intervals(goal) * refine + 1)[0]);
  }
  return grid;
}

}  // namespace bandwright
