// Rows on growth: a template that holds another must not do worse.

#include <algorithm>
#include <cmath>

#include "tests/benchmark/cases.h"
#include "tests/benchmark/quality.h"

namespace bandwright::quality {
namespace {

using namespace benchmark_cases;

// Rounding and the last steps of a local search, not a worse optimum.
constexpr double kSlackDb = 1e-3;

// The smallest rise in return loss when ladders of 1 .. n elements become 1 .. n + 1.
Outcome smallest_rise(Problem problem, int most, std::uint64_t seed, const Settings& settings) {
  Outcome outcome{INFINITY, 0};
  double before = -INFINITY;
  for (int n = 1; n <= most; ++n) {
    problem.topologies = ladders(problem, 1, n, ideal_part(), ideal_part());
    const Solved solved = solve_timed(problem, seed, settings);
    const double margin = solved.report.designs.front().margin_db;
    outcome.excess = std::min(outcome.excess, margin - before);
    outcome.seconds += solved.seconds;
    before = margin;
  }
  return outcome;
}

}  // namespace

void growth_rows(const Settings& settings, Table& table) {
  table.section("Ladders of 1 to n + 1 elements against 1 to n, same seed: never worse", "dB");
  const int most = settings.quick ? 4 : 5;
  for (const Antenna& antenna : {kWhip, kDipole}) {
    Problem problem = antenna_problem(antenna);
    problem.tolerance.samples = 0;
    problem.search.designs = 1;
    const std::string name = antenna.file + ", n + 1 = 2 to " + std::to_string(most);
    table.row({name, 0, kSlackDb, 1.0}, settings.seeds(10),
              [&](std::uint64_t seed) { return smallest_rise(problem, most, seed, settings); });
  }
}

}  // namespace bandwright::quality
