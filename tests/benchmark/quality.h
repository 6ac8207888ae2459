// The quality table: how often the engine reaches known optima, over seeds.
//
// Each part adds rows as they are done; a row states its target and whether it was met.
#pragma once

#include <functional>
#include <string>
#include <vector>

#include "solver/solver/solver.h"

namespace bandwright::quality {

struct Settings {
  bool quick = false;  // a fifth of the seeds, and no six-element ladders
  int threads = 2;

  int seeds(int full) const { return quick ? (full + 4) / 5 : full; }
};

// One answer, for one seed.
struct Outcome {
  double excess = 0;  // what was reached above the reference, in the row's unit
  double seconds = 0;
};

// One line of the table: an outcome is good if it lies no more than `slack` below the reference.
struct Row {
  std::string name;
  double reference = 0;
  double slack = 0;
  double target_share = 1;
};

class Table {
 public:
  void section(const std::string& title, const std::string& unit) const;
  // Runs `attempt` for seeds 1 .. `seeds` and prints the row.
  void row(const Row& row, int seeds, const std::function<Outcome(std::uint64_t seed)>& attempt);
  bool all_met() const { return missed_ == 0; }

 private:
  int missed_ = 0;
};

struct Solved {
  Report report;
  double seconds = 0;
};
Solved solve_timed(const Problem& problem, std::uint64_t seed, const Settings& settings);

// The worst return loss over the first goal's band at `points` frequencies, by plain evaluation.
double worst_return_loss_db(const Problem& problem, const Topology& topology, const Values& values,
                            int points);

void search_rows(const Settings& settings, Table& table);
void theory_rows(const Settings& settings, Table& table);
void growth_rows(const Settings& settings, Table& table);
void preferred_rows(const Settings& settings, Table& table);
void yield_rows(const Settings& settings, Table& table);

}  // namespace bandwright::quality
