// From searched topologies to buyable networks: the ideal finished, preferred values chosen, and,
// where yield ranks, centred.
#pragma once

#include <vector>

#include "solver/base/run_control.h"
#include "solver/search/race.h"

namespace bandwright {

struct Candidate {
  int topology = 0;  // into problem.topologies
  Values ideal;
  double ideal_margin_db = 0;
  int agreeing_starts = 0;
  Values values;
  double margin_db = 0;  // on the choice grid
  double choosing_yield = 0;
};

struct CandidateSet {
  std::vector<Candidate> candidates;  // at least one if anything was searched
  std::uint64_t evaluations = 0;
  bool all_exact = true;  // every discrete choice equals exhaustive enumeration
};

CandidateSet choose_candidates(const Problem& problem, const SearchOutcome& searched, int threads,
                               RunControl& control);

}  // namespace bandwright
