// The search for the best continuous values of one topology.
//
// Starts spread evenly in log-value space; each climbs a power mean of the badness whose exponent
// rises (2, 8, 32, 128), and is dropped as soon as its basin cannot beat the best: the mean is
// never worse than the worst point, so a basin's peak at a low exponent bounds its peak at a higher
// one from above. Kicks from the best start again near it (basin hopping; Wales and Doye, J. Phys.
// Chem. A 101, 1997). The winner is finished on the true worst point.
//
// Thread safety: none; one thread at a time. Deterministic in (topology, seed, calls made).
#pragma once

#include <cstdint>
#include <limits>
#include <vector>

#include "solver/base/random.h"
#include "solver/base/run_control.h"
#include "solver/rf/ladder.h"
#include "solver/search/local_search.h"
#include "solver/search/log_space.h"

namespace bandwright {

class TopologySearch {
 public:
  // `points` must outlive this. The topology must have no fewer than one slot.
  TopologySearch(const Topology& topology, const PointSet& points, std::uint64_t seed);

  // Runs `count` more spread starts, then `kicks` from the best; ends early when told to. Starts
  // that cannot reach `floor_db` are dropped early.
  void run(int count, int kicks, double floor_db, RunControl& control);
  // One start from given values (a smaller network's optimum, an earlier incumbent).
  void run_from(const Values& values);

  bool found() const { return best_margin_db_ > kNone; }
  double best_margin_db() const { return best_margin_db_; }
  Values best_values() const { return space_.values(best_point_); }
  const std::vector<double>& best_point() const { return best_point_; }
  // How many spread starts ended within a hair of the best.
  int agreeing_starts() const;
  int starts() const { return starts_; }
  std::uint64_t evaluations() const { return evaluations_; }
  const Topology& topology() const { return topology_; }
  const Ladder& ladder() const { return ladder_; }
  const LogSpace& space() const { return space_; }

  static constexpr double kNone = -std::numeric_limits<double>::infinity();

 private:
  struct Climb {
    std::vector<double> point;
    double margin_db = kNone;
  };

  std::vector<double> spread_start(int index) const;
  std::vector<double> kicked(int index) const;
  // Climbs from `start`, first at exponent `first_power`.
  Climb climb(std::vector<double> start, int first_power, double first_step, double floor_db);
  void keep(const Climb& climb);

  Topology topology_;
  LogSpace space_;
  Ladder ladder_;
  Ladder::Scratch scratch_;
  Values values_;  // working memory of the objective
  RandomStream random_;
  int starts_ = 0;
  int kicks_ = 0;
  std::uint64_t evaluations_ = 0;
  double best_margin_db_ = kNone;
  std::vector<double> best_point_;
  std::vector<double> ends_db_;  // margins in which spread starts ended
};

// Finishes the true worst-point optimum from `values` on `points` (a finer set than searched on).
struct Polished {
  Values values;
  double margin_db = 0;
  std::uint64_t evaluations = 0;
};
Polished polish(const Topology& topology, const Values& values, const PointSet& points,
                std::uint64_t seed);

}  // namespace bandwright
