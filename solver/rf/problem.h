// A whole matching problem, in the domain's own terms.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "solver/rf/goal.h"
#include "solver/rf/one_port.h"
#include "solver/rf/topology.h"

namespace bandwright {

struct LoadState {
  std::string name;
  OnePort port;
};

enum class Distribution { uniform, normal };  // normal: the tolerance is three standard deviations
enum class RankBy { yield, margin, part_count };
enum class Effort { quick, normal, thorough };

struct ToleranceRequest {
  int samples = 2000;  // 0: no Monte Carlo
  Distribution distribution = Distribution::uniform;
};

struct SearchRequest {
  std::uint64_t seed = 1;
  int designs = 5;
  Effort effort = Effort::normal;
};

// Invariants (checked by whoever builds one): at least one load, goal and topology; every goal
// band has 0 < from_hz <= to_hz and lies inside what every load and the source cover.
struct Problem {
  OnePort source = OnePort::constant(50.0);
  std::vector<LoadState> loads;
  std::vector<Goal> goals;
  std::vector<Topology> topologies;
  ToleranceRequest tolerance;
  SearchRequest search;
  double drive_w = 1;
  RankBy rank_by = RankBy::yield;
  bool wants_limit = true;  // report the physical limit too
};

// Geometric mean of all goal bands' edges, Hz: where default value ranges are taken.
double centre_frequency_hz(const std::vector<Goal>& goals);
// The source's resistance at `frequency_hz`, ohm.
double source_resistance_ohm(const OnePort& source, double frequency_hz);

}  // namespace bandwright
