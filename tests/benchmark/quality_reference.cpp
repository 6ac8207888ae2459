// Rows from the reference files: the continuous search, preferred values, yield.

#include <algorithm>
#include <cmath>
#include <cstdio>

#include "solver/tolerance/monte_carlo.h"
#include "tests/benchmark/quality.h"
#include "tests/benchmark/reference_file.h"

namespace bandwright::quality {
namespace {

constexpr int kReferencePoints = 4001;
// Boards that no run has seen, and the grid they are judged on.
constexpr std::uint64_t kFreshSeed = 20260701;
constexpr std::uint64_t kFreshBatch = 99;
constexpr int kFreshBoards = 100000;
constexpr int kBoardPoints = 101;

std::string case_name(const ReferenceCase& c) {
  std::string name = c.load + ", " + std::to_string(c.elements) + " elements";
  if (!c.series.empty()) name += ", " + c.series;
  if (c.inductor_q > 0) name += ", inductor Q " + std::to_string(std::lround(c.inductor_q));
  if (c.goal_db > 0) {
    char text[64];
    std::snprintf(text, sizeof text, ", goal %.1f dB, %.0f %%", c.goal_db, 100 * c.tolerance);
    name += text;
  }
  return name;
}

double reached_db(const ReferenceCase& c, const Solved& solved) {
  const Design& first = solved.report.designs.front();
  return worst_return_loss_db(c.problem, first.topology, first.values, kReferencePoints);
}

double fresh_yield(const ReferenceCase& c, const Topology& topology, const Values& values,
                   int threads) {
  const Boards boards(topology, values, Distribution::uniform, kFreshSeed, kFreshBatch);
  const PointSet points(c.problem, even_grid(c.problem.goals, kBoardPoints));
  const std::vector<double> margins =
      board_margins_db(topology, boards, points, 0, kFreshBoards, threads);
  const auto good = std::count_if(margins.begin(), margins.end(), [](double m) { return m >= 0; });
  return static_cast<double>(good) / kFreshBoards;
}

}  // namespace

void search_rows(const Settings& settings, Table& table) {
  table.section("Ideal parts: within 0.02 dB of the best known return loss, or better", "dB");
  std::vector<ReferenceCase> cases = read_reference("search.json");
  std::stable_sort(cases.begin(), cases.end(), [](const ReferenceCase& a, const ReferenceCase& b) {
    return a.elements < b.elements;
  });
  for (ReferenceCase& c : cases) {
    const bool large = c.elements >= 6;
    if (large && settings.quick) continue;
    c.problem.search.effort = large ? Effort::thorough : Effort::normal;
    c.problem.search.designs = 1;
    const int seeds = settings.seeds(large ? 5 : c.elements == 5 ? 10 : 20);
    const std::string effort = large ? ", thorough" : ", normal";
    table.row({case_name(c) + effort, c.return_loss_db, 0.02, 1.0}, seeds, [&](std::uint64_t seed) {
      const Solved solved = solve_timed(c.problem, seed, settings);
      return Outcome{reached_db(c, solved) - c.return_loss_db, solved.seconds};
    });
  }
}

void preferred_rows(const Settings& settings, Table& table) {
  table.section("Preferred values: the exact optimum up to 3 elements, within 0.05 dB with 4",
                "dB");
  for (const ReferenceCase& c : read_reference("preferred-values.json")) {
    const bool exact = c.elements <= 3;
    // The stated network, evaluated here: the file rounds, and interpolates the load its own way.
    const double reference_db =
        worst_return_loss_db(c.problem, c.topology, c.values, kReferencePoints);
    table.row({case_name(c), reference_db, exact ? 1e-4 : 0.05, exact ? 1.0 : 0.95},
              settings.seeds(20), [&](std::uint64_t seed) {
                const Solved solved = solve_timed(c.problem, seed, settings);
                return Outcome{reached_db(c, solved) - reference_db, solved.seconds};
              });
  }
}

void yield_rows(const Settings& settings, Table& table) {
  table.section("Yield on fresh boards: within 0.01 of the best by enumeration", "share");
  for (ReferenceCase& c : read_reference("yield.json")) {
    c.problem.rank_by = RankBy::yield;
    c.problem.tolerance.samples = 2000;
    const double reference = fresh_yield(c, c.topology, c.values, settings.threads);
    table.row({case_name(c), reference, 0.01, 0.95}, settings.seeds(20), [&](std::uint64_t seed) {
      const Solved solved = solve_timed(c.problem, seed, settings);
      const Design& first = solved.report.designs.front();
      const double yield = fresh_yield(c, first.topology, first.values, settings.threads);
      return Outcome{yield - reference, solved.seconds};
    });
  }
}

}  // namespace bandwright::quality
