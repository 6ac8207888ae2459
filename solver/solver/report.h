// What a finished run tells: ranked designs, each with everything known of it, and how it ended.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "solver/limit/limit.h"
#include "solver/rf/goal.h"
#include "solver/rf/problem.h"
#include "solver/rf/topology.h"

namespace bandwright {

struct GoalResult {
  double value_db = 0;  // the worst over the band and the load states, checked between samples
  double at_hz = 0;
  int load = 0;  // the load state in which it is worst
  double margin_db = 0;
  bool met = false;
};

struct Yield {
  double value = 0;
  double low = 0;  // Wilson interval at `confidence`
  double high = 0;
  double confidence = 0.95;
  int samples = 0;
  Distribution distribution = Distribution::uniform;
};

struct MarginQuantiles {
  double p01 = 0, p05 = 0, p50 = 0, p95 = 0;
};

// The share of the margin's variance over built boards that one element's spread explains.
struct ElementShare {
  int element = 0;
  double share = 0;
};

struct ElementStress {
  int element = 0;
  double peak_v = 0;  // largest over all goal bands and load states, at drive_w available
  double peak_a = 0;
  double dissipated_w = 0;
};

// A response table over the goal bands' span, for the first load state.
struct ResponseTable {
  std::vector<double> frequency_hz;
  std::vector<double> return_loss_db;
  std::vector<double> s11_re, s11_im;
  std::vector<double> transducer_gain_db;
  std::vector<double> return_loss_p05_db, return_loss_p95_db;  // empty without Monte Carlo
};

struct Ideal {
  double margin_db = 0;
  Values values;
};

// Why a design stands where it does: the figure it was ranked by. A yield here is that of the
// boards it was chosen with; the one in `Yield` is of fresh boards.
struct Ranking {
  RankBy by = RankBy::margin;
  double value = 0;
};

struct Design {
  Topology topology;
  Values values;
  bool meets_goals = false;
  double margin_db = 0;
  std::vector<GoalResult> goals;
  std::optional<Ideal> ideal;  // the best continuous values found for this topology
  std::optional<Ranking> ranking;
  int agreeing_starts = 0;  // independent starts that found the ideal values
  std::optional<Yield> yield;
  std::optional<MarginQuantiles> margin_quantiles;
  std::vector<ElementShare> sensitivity;  // empty without Monte Carlo
  std::vector<ElementStress> stress;
  double efficiency_db = 0;  // worst over the goal bands: power into the load over power accepted
  ResponseTable response;
};

struct Unmatched {
  double return_loss_db = 0;  // the worst over all goal bands and load states
  double at_hz = 0;
};

enum class StopReason { converged, budget, stopped, cancelled };
std::string_view stop_reason_name(StopReason reason);

struct Report {
  StopReason stop_reason = StopReason::converged;
  bool reproducible = true;  // false if time, not the work itself, ended the search
  std::uint64_t evaluations = 0;
  int topologies = 0;
  int topologies_done = 0;
  Unmatched unmatched;
  std::optional<MatchLimit> limit;  // nothing where any load can be matched, or if ended early
  std::vector<Design> designs;
  std::vector<std::string> warnings;
};

}  // namespace bandwright
