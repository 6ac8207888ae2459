// Every (goal, load state, frequency) of a problem as flat arrays, ready for the ladder kernel.
//
// A segment is one goal in one load state; its points stand together, padded with copies of its
// last point to a multiple of kLanes. The load's voltage and current are scaled by
// 1/sqrt(4 Re(Zs) Re(V conj I)), so that for any network behind them |V + Zs I|^2 is exactly the
// reciprocal of the transducer gain.
#pragma once

#include <vector>

#include "solver/base/aligned.h"
#include "solver/rf/problem.h"

namespace bandwright {

inline constexpr int kLanes = 8;

// The frequencies of each goal's band, Hz, increasing; the outer index is the goal.
using GoalGrid = std::vector<std::vector<double>>;

struct Segment {
  int goal = 0;
  int load = 0;
  int first = 0;   // index of its first point, a multiple of kLanes
  int count = 0;   // points without padding
  int padded = 0;  // points with padding, a multiple of kLanes
};

struct PointSet {
  std::vector<Goal> goals;
  std::vector<Segment> segments;
  std::vector<double> frequency_hz;  // of every point, padding included
  AlignedArray voltage_re, voltage_im, current_re, current_im;
  AlignedArray source_re, source_im;
  AlignedArray real;    // 1 for a point, 0 for padding
  int points = 0;       // padding included
  int real_points = 0;  // without padding
  bool source_real = true;
  bool load_passive = true;  // every load takes in real power; else gains read 0

  PointSet(const Problem& problem, const GoalGrid& grid);
};

// At least `per_band` points for each goal, log-free: evenly spaced from edge to edge, both
// included; one point for a goal at a single frequency.
GoalGrid even_grid(const std::vector<Goal>& goals, int per_band);

}  // namespace bandwright
