// Centring: values chosen for yield instead of nominal margin.
//
// The optimum of the worst point sits on a ridge; a neighbour a little lower but in the middle of
// the acceptable region often yields more (design centring; Director and Hachtel, IEEE Trans.
// CAS-24, 1977). From the best nominal choices of one topology a descent over neighbouring
// preferred values climbs the yield on one batch of boards; boards are added only to neighbours
// that are still in the running.
#pragma once

#include <cstdint>
#include <vector>

#include "solver/base/run_control.h"
#include "solver/rf/points.h"
#include "solver/tolerance/boards.h"

namespace bandwright {

// How a network does on a batch of boards: more yield first, then a higher 5 % margin.
struct YieldScore {
  double yield = 0;
  double p05_margin_db = 0;
  bool operator<(const YieldScore& other) const {
    return yield != other.yield ? yield < other.yield : p05_margin_db < other.p05_margin_db;
  }
};

struct CentreRequest {
  Distribution distribution = Distribution::uniform;
  std::uint64_t seed = 1;
  std::uint64_t batch = 0;
  int boards = 4000;
};

struct Centred {
  Values values;
  YieldScore score;
  std::uint64_t evaluations = 0;
};

YieldScore score_yield(const Topology& topology, const Values& values, const PointSet& points,
                       const CentreRequest& request);

// The best network found near `starts` (at least one; all of one topology, best margin first).
// Elements with fixed values, and those that can have any value, stay as they are.
Centred centre(const Topology& topology, const std::vector<Values>& starts, const PointSet& points,
               const CentreRequest& request, RunControl& control);

}  // namespace bandwright
