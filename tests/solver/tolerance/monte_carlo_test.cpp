// Yields with closed forms: a resistor or a resonant branch in front of a 50 ohm load, where the
// accepted range of a value is an interval and the yield its share. The closed forms are computed
// independently of any simulation (identities).
#include "solver/tolerance/monte_carlo.h"

#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>

#include "solver/tolerance/wilson.h"
#include "tests/solver/problems.h"

using namespace bandwright;
using namespace bandwright::test;

namespace {

constexpr double kFrequency = 100e6;
constexpr int kBoards = 1000000;
// A two-sided 99.9 % interval of a binomial share.
constexpr double kZ999 = 3.2905267314918945;

Slot slot(Place place, Kind kind, double relative) {
  Slot out;
  out.place = place;
  out.kind = kind;
  out.part.tolerance = {relative, 0};
  return out;
}

Problem one_frequency(OnePort load, double return_loss_db) {
  Problem problem;
  problem.loads = {{"", std::move(load)}};
  problem.goals = {Goal{GoalQuantity::return_loss, GoalBound::at_least, kFrequency, kFrequency,
                        return_loss_db, 1}};
  return problem;
}

OnePort resistor(double ohm) {
  return OnePort::constant(ohm);
}

void check_yield(const Problem& problem, const Topology& topology, const Values& values,
                 Distribution distribution, double expected) {
  const PointSet points(problem, even_grid(problem.goals, 1));
  const Boards boards(topology, values, distribution, 3, 1);
  const auto margins = board_margins_db(topology, boards, points, 0, kBoards, 2);
  const auto passed =
      std::count_if(margins.begin(), margins.end(), [](double m) { return m >= 0; });
  const Interval interval = wilson_interval(passed, kBoards, kZ999);
  CHECK_MESSAGE(interval.low <= expected, "yield ", passed / 1e6, " expected ", expected);
  CHECK_MESSAGE(interval.high >= expected, "yield ", passed / 1e6, " expected ", expected);
}

}  // namespace

TEST_CASE("a shunt resistor's yield equals its closed form") {
  // An open load leaves the resistor alone: the classical 50 ohm termination with a spread.
  const OnePort open = resistor(1e15);
  Topology topology;
  topology.slots = {slot(Place::shunt, Kind::resistor, 0.10)};
  SUBCASE("uniform 10 %, 26 dB") {
    check_yield(one_frequency(open, 26), topology, {50}, Distribution::uniform, 0.97726721);
  }
  topology.slots[0].part.tolerance = {0.20, 0};
  SUBCASE("uniform 20 %, 20 dB") {
    check_yield(one_frequency(open, 20), topology, {50}, Distribution::uniform, 0.95454545);
  }
  SUBCASE("uniform 20 %, 22 dB") {
    check_yield(one_frequency(open, 22), topology, {50}, Distribution::uniform, 0.79937193);
  }
  topology.slots[0].part.tolerance = {0, 7.5};  // absolute, three standard deviations of 2.5 ohm
  SUBCASE("normal, sigma 2.5 ohm, 26 dB") {
    check_yield(one_frequency(open, 26), topology, {50}, Distribution::normal, 0.95446685);
  }
  topology.slots[0].part.tolerance = {0, 15};
  SUBCASE("normal, sigma 5 ohm, 20 dB") {
    check_yield(one_frequency(open, 20), topology, {50}, Distribution::normal, 0.95234768);
  }
}

TEST_CASE("a resonant series branch's yield equals its closed form") {
  const double w = 2 * M_PI * kFrequency;
  const auto branch = [&](double x0, double inductor, double capacitor) {
    Topology topology;
    topology.slots = {slot(Place::series, Kind::inductor, inductor),
                      slot(Place::series, Kind::capacitor, capacitor)};
    return std::make_pair(topology, Values{x0 / w, 1 / (x0 * w)});
  };
  const auto check = [&](double x0, double l, double c, double db, Distribution d, double yield) {
    const auto [topology, values] = branch(x0, l, c);
    check_yield(one_frequency(resistor(50), db), topology, values, d, yield);
  };
  SUBCASE("200 ohm, 5 %, 20 dB") {
    check(200, .05, .05, 20, Distribution::uniform, 0.7521995);
  }
  SUBCASE("100 ohm, 5 %, 26 dB") {
    check(100, .05, .05, 26, Distribution::uniform, 0.7515016);
  }
  SUBCASE("100 ohm, 5 %, 20 dB") {
    check(100, .05, .05, 20, Distribution::uniform, 0.9997954);
  }
  SUBCASE("200 ohm, 2 %, 20 dB") {
    check(200, .02, .02, 20, Distribution::uniform, 1.0);
  }
  SUBCASE("only L, 200 ohm, 10 %") {
    check(200, .10, 0, 20, Distribution::uniform, 0.50251891);
  }
  SUBCASE("only L, 200 ohm, normal") {
    check(200, .10, 0, 20, Distribution::normal, 0.86833198);
  }
  SUBCASE("only L, 300 ohm, 5 %") {
    check(300, .05, 0, 20, Distribution::uniform, 0.67002521);
  }
  SUBCASE("only L, 300 ohm, normal") {
    check(300, .05, 0, 20, Distribution::normal, 0.95557682);
  }
}

TEST_CASE("boards do not depend on the number of threads, and batches differ") {
  const Problem problem = ladder_problem(kWhip, 3, 3, 5.5);
  const Topology& topology = problem.topologies[3];
  Values values;
  for (const Slot& s : topology.slots) values.push_back(std::sqrt(s.range.min * s.range.max));
  const PointSet points(problem, even_grid(problem.goals, 33));
  const Boards boards(topology, values, Distribution::uniform, 9, 0);
  const auto one = board_margins_db(topology, boards, points, 0, 5000, 1);
  const auto four = board_margins_db(topology, boards, points, 0, 5000, 4);
  CHECK(one == four);
  const Boards other(topology, values, Distribution::uniform, 9, 1);
  CHECK(one != board_margins_db(topology, other, points, 0, 5000, 1));
}

TEST_CASE("the whole spread is put down to the one element that varies") {
  const double w = 2 * M_PI * kFrequency;
  const Problem problem = one_frequency(resistor(50), 20);
  const PointSet points(problem, even_grid(problem.goals, 1));
  Topology topology;
  topology.slots = {slot(Place::series, Kind::inductor, 0.05),
                    slot(Place::series, Kind::capacitor, 0)};
  const Boards boards(topology, {200 / w, 1 / (200 * w)}, Distribution::uniform, 1, 1);
  const auto margins = board_margins_db(topology, boards, points, 0, 20000, 1);
  const auto shares = variance_shares(topology, boards, margins);
  CHECK(shares[0] > 0.85);  // classes of 5 % blunt the peak at resonance
  CHECK(shares[1] < 0.01);
}

TEST_CASE("quantiles interpolate between order statistics") {
  std::vector<double> values{8, 1, 4, 2}, one{5};
  CHECK(quantile(values, 0) == 1);
  CHECK(quantile(values, 1) == 8);
  CHECK(quantile(values, 0.5) == doctest::Approx(3));
  CHECK(quantile(one, 0.3) == 5);
}
