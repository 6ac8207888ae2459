// The files of tests/data/reference: best known, exact and best-yielding networks of given cases.
#pragma once

#include <string>
#include <vector>

#include "solver/rf/problem.h"

namespace bandwright::quality {

struct ReferenceCase {
  std::string load;
  int elements = 0;
  double return_loss_db = 0;
  std::string series;       // "E24"; empty for ideal parts
  double inductor_q = 0;    // 0: lossless
  double goal_db = 0;       // 0: as good as possible
  double tolerance = 0.05;  // relative
  double yield = 0;
  // The network stated, as a topology with fixed values.
  Topology topology;
  Values values;
  // One open goal over the case's band and every ladder of `elements`.
  Problem problem;
};

// Throws if the file cannot be read.
std::vector<ReferenceCase> read_reference(const std::string& file);

}  // namespace bandwright::quality
