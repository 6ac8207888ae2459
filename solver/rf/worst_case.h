// Where in its band, and in which load state, a network meets a goal worst.
#pragma once

#include "solver/rf/goal.h"
#include "solver/rf/problem.h"

namespace bandwright {

struct WorstCase {
  double value_db = 0;
  double at_hz = 0;
  int load = 0;
};

// The goal's quantity for one network, load state and frequency, dB.
double goal_value_db(const Topology& topology, const Values& values, const OnePort& source,
                     const OnePort& load, const Goal& goal, double frequency_hz);

// Looks at `points` evenly spaced frequencies, then closes in on the local extremes near the worst
// by golden section, so that a dip between the points is found too.
WorstCase worst_over_band(const Topology& topology, const Values& values, const Problem& problem,
                          const Goal& goal, int points);

}  // namespace bandwright
