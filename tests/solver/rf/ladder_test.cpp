#include "solver/rf/ladder.h"

#include <doctest/doctest.h>

#include <cmath>

#include "solver/base/random.h"
#include "solver/rf/response.h"
#include "solver/rf/worst_case.h"
#include "tests/solver/problems.h"

using namespace bandwright;
using namespace bandwright::test;

namespace {

constexpr double kInf = INFINITY;

// A network of one to seven elements with a random mix of ideal and lossy parts.
Topology random_topology(const RandomStream& draw, Values& values) {
  Topology out;
  const int n = 1 + static_cast<int>(draw.uniform(0) * 7);
  for (int i = 0; i < n; ++i) {
    const RandomStream d = draw.fork(i + 1);
    Slot slot;
    slot.place = d.uniform(0) < 0.5 ? Place::series : Place::shunt;
    slot.kind = d.uniform(1) < 0.4   ? Kind::inductor
                : d.uniform(1) < 0.8 ? Kind::capacitor
                                     : Kind::resistor;
    if (d.uniform(2) < 0.4) slot.part.q = QualityFactor{20 + 80 * d.uniform(3), 150e6, 0.5};
    if (d.uniform(4) < 0.4) slot.part.esr_ohm = d.uniform(5);
    if (d.uniform(6) < 0.3) slot.part.self_resonance_hz = 400e6 + 2e9 * d.uniform(7);
    if (d.uniform(8) < 0.3) slot.part.self_inductance_h = 1e-9 * d.uniform(9);
    const double x = 50 * std::pow(10, 2 * d.uniform(10) - 1), w = 2 * M_PI * 150e6;
    values.push_back(slot.kind == Kind::inductor    ? x / w
                     : slot.kind == Kind::capacitor ? 1 / (x * w)
                                                    : x);
    out.slots.push_back(slot);
  }
  return out;
}

Goal goal(GoalQuantity quantity, GoalBound bound, double from, double to, double db,
          double weight) {
  Goal out;
  out.quantity = quantity;
  out.bound = bound;
  out.from_hz = from;
  out.to_hz = to;
  out.bound_db = db;
  out.weight = weight;
  return out;
}

Problem mixed_problem(Complex source_ohm) {
  Problem problem;
  problem.source = OnePort::constant(source_ohm);
  problem.loads = {
      {"free", antenna(kWhip.file)},
      {"near a wall", OnePort::from_circuit({Circuit::Type::series,
                                             0,
                                             {{Circuit::Type::resistor, 9, {}},
                                              {Circuit::Type::capacitor, 12e-12, {}}}})}};
  problem.goals = {
      goal(GoalQuantity::return_loss, GoalBound::at_least, 140e6, 150e6, 6, 1),
      goal(GoalQuantity::return_loss, GoalBound::at_most, 170e6, 175e6, 1, 2),
      goal(GoalQuantity::transducer_gain, GoalBound::at_least, 141e6, 147e6, -1, 0.5),
      goal(GoalQuantity::transducer_gain, GoalBound::at_most, 125e6, 130e6, -10, 1),
      goal(GoalQuantity::return_loss, GoalBound::best, 152e6, 152e6, 0, 1),
  };
  return problem;
}

}  // namespace

TEST_CASE("the kernel's margins equal the plain evaluation for any mix of parts and goals") {
  for (Complex source : {Complex(50, 0), Complex(30, -45)}) {
    const Problem problem = mixed_problem(source);
    const PointSet points(problem, even_grid(problem.goals, 11));
    for (int trial = 0; trial < 200; ++trial) {
      Values values;
      const Topology topology = random_topology(RandomStream(11, trial), values);
      const Ladder ladder(topology, points);
      Ladder::Scratch scratch = ladder.make_scratch();
      std::vector<double> margins(points.points);
      const double least = ladder.point_margins_db(values.data(), margins.data(), scratch);
      double expected_least = kInf;
      for (const Segment& segment : points.segments) {
        const Goal& g = problem.goals[segment.goal];
        for (int k = segment.first; k < segment.first + segment.count; ++k) {
          const double value =
              goal_value_db(topology, values, problem.source, problem.loads[segment.load].port, g,
                            points.frequency_hz[k]);
          CHECK(margins[k] == doctest::Approx(g.margin_db(value)).epsilon(1e-8));
          expected_least = std::min(expected_least, g.margin_db(value));
        }
      }
      CHECK(least == doctest::Approx(expected_least).epsilon(1e-8));
      CHECK(ladder.margin_db(values.data(), scratch) == doctest::Approx(least).epsilon(1e-9));
    }
  }
}

TEST_CASE("the smooth margin never lies below the margin and falls to it as its power rises") {
  const Problem problem = ladder_problem(kWhip, 3, 3, 6);
  const PointSet points(problem, even_grid(problem.goals, 33));
  for (const Topology& topology : problem.topologies) {
    const Ladder ladder(topology, points);
    Ladder::Scratch scratch = ladder.make_scratch();
    Values values;
    for (const Slot& slot : topology.slots) {
      values.push_back(std::sqrt(slot.range.min * slot.range.max));
    }
    const double margin = ladder.margin_db(values.data(), scratch);
    double above = kInf;
    for (int power : {2, 8, 32, 128, 512, 2048}) {
      const double smooth = ladder.smooth_margin_db(values.data(), power, scratch);
      CHECK(smooth >= margin - 1e-9);
      CHECK(smooth <= above + 1e-9);
      above = smooth;
    }
    CHECK(above == doctest::Approx(margin).epsilon(0.02));
  }
}

TEST_CASE("a load that takes in no power has a gain of nothing, not an infinity") {
  Problem problem;
  problem.loads = {{"", OnePort::from_circuit({Circuit::Type::capacitor, 10e-12, {}})}};
  problem.goals = {goal(GoalQuantity::transducer_gain, GoalBound::at_least, 100e6, 110e6, -1, 1),
                   goal(GoalQuantity::return_loss, GoalBound::at_least, 100e6, 110e6, 6, 1)};
  Topology topology;
  topology.slots.resize(1);
  topology.slots[0].range = {1e-9, 1e-6};
  const PointSet points(problem, even_grid(problem.goals, 5));
  const Ladder ladder(topology, points);
  Ladder::Scratch scratch = ladder.make_scratch();
  const double value = 50e-9;
  CHECK(ladder.margin_db(&value, scratch) < -100);
  CHECK(std::isfinite(ladder.margin_db(&value, scratch)));
  CHECK(ladder.segment_margin_db(1, scratch) == doctest::Approx(-6).epsilon(1e-6));
}
