// Prints the quality table; ends with failure if a target is missed.

#include "tests/benchmark/quality.h"

#include <algorithm>
#include <chrono>
#include <cmath>
#include <cstdio>
#include <cstring>

#include "solver/rf/points.h"
#include "solver/rf/response.h"

namespace bandwright::quality {

void Table::section(const std::string& title, const std::string& unit) const {
  std::printf("\n### %s\n\n", title.c_str());
  std::printf("| case | reference, %s | good seeds | target | worst | best | median s | |\n",
              unit.c_str());
  std::printf("|---|---|---|---|---|---|---|---|\n");
  std::fflush(stdout);
}

void Table::row(const Row& row, int seeds,
                const std::function<Outcome(std::uint64_t seed)>& attempt) {
  std::vector<double> excess, seconds;
  for (int seed = 1; seed <= seeds; ++seed) {
    const Outcome outcome = attempt(seed);
    excess.push_back(outcome.excess);
    seconds.push_back(outcome.seconds);
  }
  std::sort(excess.begin(), excess.end());
  std::sort(seconds.begin(), seconds.end());
  const auto good = std::count_if(excess.begin(), excess.end(),
                                  [&](double above) { return above >= -row.slack; });
  const int wanted = static_cast<int>(std::floor(row.target_share * seeds + 1e-9));
  const bool met = good >= wanted;
  missed_ += met ? 0 : 1;
  std::printf("| %s | %.4f | %d of %d | %d | %+.4f | %+.4f | %.2f | %s |\n", row.name.c_str(),
              row.reference, static_cast<int>(good), seeds, wanted, excess.front(), excess.back(),
              seconds[seconds.size() / 2], met ? "met" : "missed");
  std::fflush(stdout);
}

Solved solve_timed(const Problem& problem, std::uint64_t seed, const Settings& settings) {
  Problem seeded = problem;
  seeded.search.seed = seed;
  RunControl control;
  const auto start = std::chrono::steady_clock::now();
  Solved solved{solve(seeded, settings.threads, control), 0};
  const std::chrono::duration<double> taken = std::chrono::steady_clock::now() - start;
  solved.seconds = taken.count();
  return solved;
}

double worst_return_loss_db(const Problem& problem, const Topology& topology, const Values& values,
                            int points) {
  double worst = INFINITY;
  const GoalGrid grid = even_grid({problem.goals.front()}, points);
  for (double f : grid[0]) {
    const PortResponse response =
        respond(topology, values, problem.source, problem.loads.front().port, f);
    worst = std::min(worst, return_loss_db(std::abs(response.reflection)));
  }
  return worst;
}

}  // namespace bandwright::quality

int main(int count, char** arguments) {
  using namespace bandwright::quality;
  Settings settings;
  settings.quick = count > 1 && std::strcmp(arguments[1], "--quick") == 0;
  Table table;
  std::printf(
      "# Quality\n\nOver seeds 1, 2, ...; worst and best are what was reached above the "
      "reference.\n");
  theory_rows(settings, table);
  preferred_rows(settings, table);
  yield_rows(settings, table);
  growth_rows(settings, table);
  search_rows(settings, table);
  std::printf("\n%s\n", table.all_met() ? "All targets met." : "Some targets missed.");
  return table.all_met() ? 0 : 1;
}
