#include "solver/search/discrete.h"

#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>
#include <set>

#include "solver/rf/ladder.h"
#include "tests/solver/problems.h"

using namespace bandwright;
using namespace bandwright::test;

namespace {

// Every combination, tried one by one.
Choice by_enumeration(const Topology& topology, const PointSet& points) {
  const Ladder ladder(topology, points);
  Ladder::Scratch scratch = ladder.make_scratch();
  std::vector<std::vector<double>> lists;
  for (const Slot& slot : topology.slots) {
    lists.push_back(slot.fixed() ? std::vector<double>{slot.range.min}
                                 : offered_values(slot.part, slot.range.min, slot.range.max));
  }
  Choice best{{}, -1e300};
  std::vector<std::size_t> at(lists.size(), 0);
  Values values(lists.size());
  while (true) {
    for (std::size_t i = 0; i < at.size(); ++i) values[i] = lists[i][at[i]];
    const double margin = ladder.margin_db(values.data(), scratch);
    if (margin > best.margin_db) best = {values, margin};
    std::size_t i = 0;
    while (i < at.size() && ++at[i] == lists[i].size()) at[i++] = 0;
    if (i == at.size()) return best;
  }
}

void check_all(const Problem& problem) {
  const GoalGrid grid = even_grid(problem.goals, 17);
  const PointSet screen(problem, spread_order(grid)), fine(problem, even_grid(problem.goals, 33));
  RunControl control;
  for (const Topology& topology : problem.topologies) {
    Values centre;
    for (const Slot& slot : topology.slots) {
      centre.push_back(std::sqrt(slot.range.min * slot.range.max));
    }
    const DiscreteOutcome out =
        choose_values(topology, centre, screen, fine, -INFINITY, 2, 1, control);
    const Choice expected = by_enumeration(topology, fine);
    REQUIRE(!out.best.empty());
    CHECK(out.exact);
    CHECK_MESSAGE(out.best[0].margin_db == expected.margin_db, topology.describe());
  }
}

}  // namespace

TEST_CASE("the choice of preferred values equals exhaustive enumeration") {
  Part lossy_inductor = part(Series::e6), lossy_capacitor = part(Series::e6);
  lossy_inductor.q = QualityFactor{40, 150e6, 0.5};
  lossy_inductor.self_resonance_hz = 900e6;
  lossy_capacitor.esr_ohm = 0.2;
  lossy_capacitor.self_inductance_h = 0.5e-9;
  SUBCASE("ideal parts") {
    check_all(ladder_problem(kWhip, 1, 3, 6, part(Series::e6), part(Series::e6)));
  }
  SUBCASE("lossy parts, a shunt capacitor with series inductance among them") {
    check_all(ladder_problem(kDipole, 1, 3, 12, lossy_inductor, lossy_capacitor));
  }
  SUBCASE("goals of every quantity and bound, a reactive source") {
    Problem problem = ladder_problem(kWhip, 2, 2, 5, lossy_inductor, lossy_capacitor);
    problem.source = OnePort::constant(Complex(40, 25));
    Goal gain = problem.goals[0], stop = problem.goals[0], reject = problem.goals[0];
    gain.quantity = stop.quantity = GoalQuantity::transducer_gain;
    gain.bound_db = -2;
    stop.bound = reject.bound = GoalBound::at_most;
    stop.from_hz = reject.from_hz = 170e6;
    stop.to_hz = reject.to_hz = 178e6;
    stop.bound_db = -6;
    reject.bound_db = 2;
    reject.weight = 0.5;
    problem.goals.insert(problem.goals.end(), {gain, stop, reject});
    check_all(problem);
  }
  SUBCASE("a fixed element and a list of stock values") {
    Problem problem = ladder_problem(
        kWhip, 3, 3, 6, part(std::vector<double>{47e-9, 56e-9, 62e-9, 82e-9}), part(Series::e3));
    for (Topology& topology : problem.topologies) {
      Slot& slot = topology.slots[1];
      const double value = slot.kind == Kind::inductor ? 68e-9 : 12e-12;
      slot.range = {value, value};
    }
    check_all(problem);
  }
}

TEST_CASE("a spread order holds each frequency once and begins with the band's ends") {
  const Goal goal{GoalQuantity::return_loss, GoalBound::at_least, 1e8, 2e8, 6, 1};
  for (int count : {2, 3, 5, 8, 33, 100}) {
    const GoalGrid grid = even_grid({goal}, count);
    const std::vector<double> order = spread_order(grid)[0];
    CHECK(order.size() == grid[0].size());
    CHECK(std::set<double>(order.begin(), order.end()) ==
          std::set<double>(grid[0].begin(), grid[0].end()));
    CHECK(order[0] == 1e8);
    CHECK(order[1] == 2e8);
  }
}

TEST_CASE("an element of any value is fitted to the preferred values beside it") {
  Problem problem = ladder_problem(kWhip, 2, 2, 5, part(AnyValue{}), part(Series::e24));
  const PointSet screen(problem, spread_order(even_grid(problem.goals, 33)));
  const PointSet fine(problem, even_grid(problem.goals, 65));
  RunControl control;
  for (const Topology& topology : problem.topologies) {
    Values centre;
    for (const Slot& slot : topology.slots) {
      centre.push_back(std::sqrt(slot.range.min * slot.range.max));
    }
    const auto out = choose_values(topology, centre, screen, fine, -INFINITY, 1, 1, control);
    REQUIRE(!out.best.empty());
    for (std::size_t i = 0; i < topology.slots.size(); ++i) {
      if (topology.slots[i].kind != Kind::capacitor) continue;
      const auto list = offered_values(topology.slots[i].part, topology.slots[i].range.min,
                                       topology.slots[i].range.max);
      CHECK(std::find(list.begin(), list.end(), out.best[0].values[i]) != list.end());
    }
  }
}
