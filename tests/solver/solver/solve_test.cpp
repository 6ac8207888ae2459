#include "solver/solver/solver.h"

#include <doctest/doctest.h>

#include <cmath>
#include <thread>

#include "solver/rf/response.h"
#include "tests/solver/problems.h"

using namespace bandwright;
using namespace bandwright::test;

namespace {

Part lossy(Series series, double q) {
  Part out = part(series);
  out.q = QualityFactor{q, 150e6, 0.5};
  return out;
}

bool same(const Report& a, const Report& b) {
  if (a.designs.size() != b.designs.size() || a.evaluations != b.evaluations) return false;
  for (std::size_t i = 0; i < a.designs.size(); ++i) {
    const Design &x = a.designs[i], &y = b.designs[i];
    if (x.values != y.values || x.margin_db != y.margin_db || x.ideal->values != y.ideal->values ||
        x.yield->value != y.yield->value ||
        x.response.return_loss_p05_db != y.response.return_loss_p05_db) {
      return false;
    }
  }
  return true;
}

}  // namespace

TEST_CASE("the same problem gives the same report with 1, 2 and 4 threads") {
  Problem problem = ladder_problem(kDipole, 2, 3, 12, lossy(Series::e24, 60), part(Series::e24));
  problem.tolerance.samples = 2000;
  RunControl a, b, c;
  const Report one = solve(problem, 1, a);
  CHECK(same(one, solve(problem, 2, b)));
  CHECK(same(one, solve(problem, 4, c)));
  CHECK(one.reproducible);
}

TEST_CASE("every reported worst value equals an independent dense evaluation") {
  Problem problem = ladder_problem(kWhip, 3, 3, 5.5, lossy(Series::e24, 60), part(Series::e24));
  problem.search.designs = 8;
  RunControl control;
  const Report report = solve(problem, 2, control);
  REQUIRE(report.designs.size() == 8);
  for (const Design& design : report.designs) {
    double worst = INFINITY;
    for (int k = 0; k <= 20000; ++k) {
      const double f = kWhip.from_hz + (kWhip.to_hz - kWhip.from_hz) * k / 20000.0;
      const PortResponse r =
          respond(design.topology, design.values, problem.source, problem.loads[0].port, f);
      worst = std::min(worst, return_loss_db(std::abs(r.reflection)));
    }
    CHECK(std::fabs(design.goals[0].value_db - worst) < 0.001);
    CHECK(design.goals[0].margin_db == doctest::Approx(design.goals[0].value_db - 5.5));
  }
}

TEST_CASE("power into the load and into heat is the power accepted") {
  const Problem problem =
      ladder_problem(kWhip, 4, 4, 5.5, lossy(Series::e24, 40), part(Series::e24));
  for (const Topology& topology : problem.topologies) {
    Values values;
    for (const Slot& slot : topology.slots) {
      values.push_back(std::sqrt(slot.range.min * slot.range.max));
    }
    for (double f : {140e6, 151e6, 160e6}) {
      const DrivenState state =
          drive(topology, values, problem.source, problem.loads[0].port, f, 5);
      double total = state.load_w;
      for (const ElementState& element : state.elements) total += element.dissipated_w;
      CHECK(total == doctest::Approx(state.accepted_w).epsilon(1e-9));
      const PortResponse r = respond(topology, values, problem.source, problem.loads[0].port, f);
      CHECK(state.load_w == doctest::Approx(5 * r.transducer_gain).epsilon(1e-9));
      CHECK(state.accepted_w == doctest::Approx(5 * (1 - std::norm(r.reflection))).epsilon(1e-9));
    }
  }
}

TEST_CASE("a stopped run reports the best so far and says that it is not reproducible") {
  Problem problem = ladder_problem(kDipole, 2, 6, 12);
  problem.tolerance.samples = 500;
  RunControl control;
  std::jthread stopper([&] {
    while (!control.progress().best_margin_db) std::this_thread::yield();
    control.request_stop();
  });
  const Report report = solve(problem, 2, control);
  CHECK(report.stop_reason == StopReason::stopped);
  CHECK(!report.reproducible);
  REQUIRE(!report.designs.empty());
  CHECK(std::isfinite(report.designs[0].margin_db));
}

TEST_CASE("a run whose time is over before it began still answers") {
  Problem problem = ladder_problem(kDipole, 3, 3, 12);
  problem.tolerance.samples = 100;
  RunControl control;
  control.set_deadline(RunControl::Clock::now());
  const Report report = solve(problem, 2, control);
  CHECK(report.stop_reason == StopReason::budget);
  CHECK(!report.reproducible);
  CHECK(!report.designs.empty());
}

TEST_CASE("a network of fixed values is described as it is") {
  Problem problem = ladder_problem(kWhip, 2, 2, 5.5);
  Topology topology;
  topology.slots.resize(2);
  topology.slots[0] = {Place::shunt, Kind::inductor, {75e-9, 75e-9}, {}, 0};
  topology.slots[1] = {Place::series, Kind::inductor, {62e-9, 62e-9}, {}, 1};
  problem.topologies = {topology};
  problem.tolerance.samples = 1000;
  const Design design = analyse(problem, {75e-9, 62e-9}, {130e6, 170e6, 41}, 1);
  // Exhaustive enumeration of E24 found 5.8621 dB for this network (reference data).
  CHECK(design.goals[0].value_db == doctest::Approx(5.8621).epsilon(1e-4));
  CHECK(design.response.frequency_hz.size() == 41);
  CHECK(design.response.frequency_hz.back() == 170e6);
  CHECK(design.efficiency_db == 0);
  RunControl control;
  const Report report = solve(problem, 1, control);
  REQUIRE(report.designs.size() == 1);
  CHECK(report.designs[0].values == Values{75e-9, 62e-9});
}

TEST_CASE("centring finds the best yield that enumeration found") {
  // Best yields of all E24 ladders by enumeration with 400,000 boards each (reference data): the
  // dipole with 3 parts at 13 dB, 0.9693 where the nominal optimum has 0.8671; the whip with 3
  // parts at 5.5 dB, 0.9979 against 0.9888.
  struct Case {
    Antenna which;
    double goal_db, yield;
  };
  for (const Case& c : {Case{kDipole, 13, 0.9693}, Case{kWhip, 5.5, 0.9979}}) {
    for (std::uint64_t seed : {1, 2, 3}) {
      Problem problem = ladder_problem(c.which, 3, 3, c.goal_db);
      problem.tolerance.samples = 10000;
      problem.search.seed = seed;
      RunControl control;
      const Report report = solve(problem, 2, control);
      CHECK(report.designs[0].yield->value > c.yield - 0.01);
    }
  }
}
