// The kernel's cost: one margin of one network, against the core's peak, over the number of
// elements and of frequencies.

#include <benchmark/benchmark.h>

#include <cmath>

#include "tests/benchmark/cases.h"
#include "tests/benchmark/fma_peak.h"
#include "tests/benchmark/operation_count.h"

namespace bandwright::benchmark_cases {
namespace {

using benchmark::Counter;

enum class Loss { none, q, real };

Topology ladder_of(Loss loss, int elements) {
  switch (loss) {
    case Loss::none:
      return mixed_ladder(elements, ideal_part(), ideal_part());
    case Loss::q:
      return mixed_ladder(elements, part_with_q(60), part_with_q(400));
    case Loss::real:
      break;
  }
  return mixed_ladder(elements, real_inductor(), real_capacitor());
}

// Values near those of a good match, so that no evaluation is a special case.
Values typical_values(const Topology& topology) {
  Values values;
  for (const Slot& slot : topology.slots) {
    values.push_back(slot.kind == Kind::inductor ? 47e-9 : 20e-12);
  }
  return values;
}

void peak(benchmark::State& state) {
  std::uint64_t operations = 0;
  for (auto _ : state) operations += multiply_add(100000);
  state.counters["operations"] = Counter(static_cast<double>(operations), Counter::kIsRate);
}
BENCHMARK(peak);

// One network after another, each a little different, as a search does it.
template <class Evaluate>
void evaluate(benchmark::State& state, Loss loss, const Evaluate& margin) {
  const int elements = static_cast<int>(state.range(0));
  const int points = static_cast<int>(state.range(1));
  const Problem problem = antenna_problem(kWhip);
  const Topology topology = ladder_of(loss, elements);
  const PointSet set(problem, even_grid(problem.goals, points));
  const Ladder ladder(topology, set);
  Ladder::Scratch scratch = ladder.make_scratch();
  Values values = typical_values(topology);
  for (auto _ : state) {
    values[0] *= 1 + 1e-9;
    benchmark::DoNotOptimize(margin(ladder, values, scratch));
  }
  const double count = operations_per_point(ladder, loss == Loss::none) * set.real_points;
  state.counters["operations_per_point"] = count / set.real_points;
  state.counters["operations"] = Counter(count, Counter::kIsIterationInvariantRate);
  state.SetLabel(kernel_instruction_set());
}

double worst_margin(const Ladder& ladder, const Values& values, Ladder::Scratch& scratch) {
  return ladder.margin_db(values.data(), scratch);
}

double smooth_margin(const Ladder& ladder, const Values& values, Ladder::Scratch& scratch) {
  return ladder.smooth_margin_db(values.data(), 32, scratch);
}

void lossless(benchmark::State& state) {
  evaluate(state, Loss::none, worst_margin);
}
void lossy_q(benchmark::State& state) {
  evaluate(state, Loss::q, worst_margin);
}
void lossy_real(benchmark::State& state) {
  evaluate(state, Loss::real, worst_margin);
}
void smooth(benchmark::State& state) {
  evaluate(state, Loss::none, smooth_margin);
}

void elements_and_points(benchmark::internal::Benchmark* b) {
  b->ArgNames({"elements", "points"});
  for (int elements = 1; elements <= 8; ++elements) b->Args({elements, 104});
  for (int points : {16, 32, 64, 208, 416, 1000, 4000}) b->Args({4, points});
}
BENCHMARK(lossless)->Apply(elements_and_points);
BENCHMARK(lossy_q)->Apply(elements_and_points);
BENCHMARK(lossy_real)->Apply(elements_and_points);
BENCHMARK(smooth)->Args({4, 104})->ArgNames({"elements", "points"});

}  // namespace
}  // namespace bandwright::benchmark_cases

BENCHMARK_MAIN();
