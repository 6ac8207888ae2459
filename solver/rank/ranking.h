// The order in which designs are shown.
//
// Distinct topologies come first; another choice of values for a topology already shown follows
// after all of them. Inside that the request's rule decides, and ties go to the larger margin, then
// to fewer parts.
#pragma once

#include <cstddef>
#include <vector>

#include "solver/rf/problem.h"

namespace bandwright {

// What ranking needs to know of one design.
struct RankKey {
  int topology = 0;
  double yield = 0;  // on the boards it was chosen with; ties everywhere when there were none
  double margin_db = 0;
  bool meets_goals = false;
  int parts = 0;
};

// The indices of `keys`, best first.
std::vector<std::size_t> rank(const std::vector<RankKey>& keys, RankBy by);

}  // namespace bandwright
