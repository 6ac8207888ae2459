// Whole jobs and their stages: a job as a user sends it, a search on one and two threads, the cost
// over topologies, boards of a Monte Carlo run.

#include <benchmark/benchmark.h>

#include <algorithm>

#include "solver/search/race.h"
#include "solver/solver/grids.h"
#include "solver/solver/solver.h"
#include "solver/tolerance/monte_carlo.h"
#include "tests/benchmark/cases.h"

namespace bandwright::benchmark_cases {
namespace {

constexpr int kThreeElements = 3;
constexpr int kSamples = 10000;

const Antenna& antenna(std::int64_t number) {
  return number == 0 ? kWhip : kDipole;
}

// All ladders of three lossless E24 parts, 10,000 boards. With five designs the physical limit is
// found too, as in a job that leaves everything to its defaults.
void job(benchmark::State& state) {
  Problem problem = antenna_problem(antenna(state.range(0)));
  problem.topologies = ladders(problem, kThreeElements, kThreeElements, preferred_part(Series::e24),
                               preferred_part(Series::e24));
  problem.tolerance.samples = kSamples;
  problem.search.designs = static_cast<int>(state.range(1));
  problem.wants_limit = problem.search.designs > 1;
  Report report;
  for (auto _ : state) {
    RunControl control;
    report = solve(problem, static_cast<int>(state.range(2)), control);
  }
  const Design& best = report.designs.front();
  state.counters["return_loss_db"] = best.goals.front().value_db;
  state.counters["yield"] = best.yield->value;
  state.SetLabel(best.topology.describe());
}
BENCHMARK(job)
    ->ArgNames({"antenna", "designs", "threads"})
    ->Args({0, 1, 1})
    ->Args({1, 1, 1})
    ->Args({0, 1, 2})
    ->Args({1, 1, 2})
    ->Args({0, 5, 1})
    ->Args({1, 5, 1})
    ->Unit(benchmark::kMillisecond)
    ->UseRealTime();

// The continuous search alone, over every ladder of exactly n ideal elements.
void search(benchmark::State& state) {
  Problem problem = antenna_problem(kDipole);
  const int elements = static_cast<int>(state.range(0));
  problem.topologies = ladders(problem, elements, elements, ideal_part(), ideal_part());
  const PointSet points(problem, goal_grid(problem.goals, 1));
  SearchOutcome outcome;
  for (auto _ : state) {
    RunControl control;
    outcome = search_topologies(problem, points, static_cast<int>(state.range(1)), control);
  }
  state.counters["topologies"] = static_cast<double>(problem.topologies.size());
  state.counters["evaluations"] = static_cast<double>(outcome.evaluations);
}
BENCHMARK(search)
    ->ArgNames({"elements", "threads"})
    ->Args({1, 1})
    ->Args({2, 1})
    ->Args({3, 1})
    ->Args({4, 1})
    ->Args({5, 1})
    ->Args({5, 2})
    ->Unit(benchmark::kMillisecond)
    ->UseRealTime();

// The worst return loss of every board of one network of five real parts.
void boards(benchmark::State& state) {
  const int samples = static_cast<int>(state.range(0));
  const int points = static_cast<int>(state.range(1));
  const Problem problem = antenna_problem(kWhip);
  const Topology topology = mixed_ladder(5, real_inductor(), real_capacitor());
  const Values nominal{20e-12, 47e-9, 33e-9, 10e-12, 47e-12};
  const PointSet set(problem, even_grid(problem.goals, points));
  double yield = 0;
  for (auto _ : state) {
    const Boards drawn(topology, nominal, Distribution::uniform, 1, 0);
    const std::vector<double> margins = board_margins_db(topology, drawn, set, 0, samples, 1);
    const auto good =
        std::count_if(margins.begin(), margins.end(), [](double m) { return m >= 0; });
    yield = static_cast<double>(good) / samples;
  }
  state.counters["yield"] = yield;
}
BENCHMARK(boards)
    ->ArgNames({"samples", "points"})
    ->Args({10000, 101})
    ->Args({100, 101})
    ->Args({1000, 101})
    ->Args({100000, 101})
    ->Args({1000000, 101})
    ->Unit(benchmark::kMillisecond);

}  // namespace
}  // namespace bandwright::benchmark_cases
