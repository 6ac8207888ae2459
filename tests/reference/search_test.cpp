// The search against the best known optima, and the discrete choice against enumeration.
//
// tests/data/reference holds the best worst-case return losses found by very long searches over all
// ladders of N ideal elements, and the exact optima over preferred values by enumeration, for the
// sampled antennas. The closed cases: Carlin and Amstutz, IEEE Trans. CAS-28 (1981), for the load
// R = 1 parallel C = 2 (their claim that equal ripple is not optimum is from memory; the values
// were computed by brute-force minimax); and the classical load L = 2.3, R = 1 parallel C = 1.2
// (Carlin, IEEE Trans. CAS-24, 1977; the values were computed, not read).
#include <doctest/doctest.h>

#include <cmath>
#include <nlohmann/json.hpp>

#include "solver/rf/response.h"
#include "solver/solver/solver.h"
#include "tests/solver/problems.h"

using namespace bandwright;
using namespace bandwright::test;

namespace {

nlohmann::json reference(const std::string& name) {
  return nlohmann::json::parse(
      read_file(std::string(BANDWRIGHT_SOURCE_DIR) + "/tests/data/reference/" + name + ".json"));
}

// Worst return loss at 4001 points, as the reference data have it.
double worst_return_loss_db(const Problem& problem, const Topology& topology,
                            const Values& values) {
  const Goal& goal = problem.goals[0];
  double worst = INFINITY;
  for (int k = 0; k <= 4000; ++k) {
    const double f = goal.from_hz + (goal.to_hz - goal.from_hz) * k / 4000.0;
    const auto r = respond(topology, values, problem.source, problem.loads[0].port, f);
    worst = std::min(worst, return_loss_db(std::abs(r.reflection)));
  }
  return worst;
}

Problem case_problem(const nlohmann::json& c, const Part& inductor, const Part& capacitor) {
  const std::string file = c.at("file");
  const Antenna antenna{file.c_str(), c.at("from_hz"), c.at("to_hz")};
  const int n = c.at("elements");
  Problem problem = ladder_problem(antenna, n, n, 0, inductor, capacitor);
  problem.goals[0].bound = GoalBound::best;
  problem.rank_by = RankBy::margin;
  problem.search.designs = 1;
  return problem;
}

double best_found_db(Problem problem, std::uint64_t seed) {
  problem.search.seed = seed;
  RunControl control;
  const Report report = solve(problem, 2, control);
  // Six elements may need more than the normal effort for three starts to agree.
  if (report.designs.at(0).values.size() <= 5) {
    CHECK(report.stop_reason == StopReason::converged);
  }
  const Design& first = report.designs.at(0);
  return worst_return_loss_db(problem, first.topology, first.values);
}

// Normalised low-pass loads, scaled to 50 ohm and a band from nearly zero to 100 MHz. Elements from
// the load: shunt C first; the network is written from the source.
Problem low_pass_problem(const Circuit& load, double source_r, int elements, bool series_first) {
  constexpr double kUnit = 2 * M_PI * 100e6;
  Problem problem;
  problem.source = OnePort::constant(50 * source_r);
  problem.loads = {{"", OnePort::from_circuit(load)}};
  problem.goals = {Goal{GoalQuantity::return_loss, GoalBound::best, 1e4, 100e6, 0, 1}};
  problem.tolerance.samples = 0;
  problem.rank_by = RankBy::margin;
  problem.search.designs = 1;
  Topology topology;
  for (int i = elements; i-- > 0;) {
    const bool series = (i % 2 == 0) == series_first;
    Slot slot;
    slot.place = series ? Place::series : Place::shunt;
    slot.kind = series ? Kind::inductor : Kind::capacitor;
    const double unit = series ? 50 / kUnit : 1 / (50 * kUnit);
    slot.range = {0.02 * unit, 50 * unit};
    slot.part.values = AnyValue{};
    topology.slots.push_back(slot);
  }
  problem.topologies = {topology};
  return problem;
}

Circuit resistor(double r) {
  return {Circuit::Type::resistor, 50 * r, {}};
}
Circuit capacitor(double c) {
  return {Circuit::Type::capacitor, c / (50 * 2 * M_PI * 100e6), {}};
}
Circuit inductor(double l) {
  return {Circuit::Type::inductor, l * 50 / (2 * M_PI * 100e6), {}};
}

}  // namespace

TEST_CASE("the search reaches the best known optimum of every ladder of 2 and 3 elements") {
  for (const auto& c : reference("search").at("cases")) {
    if (c.at("elements") > 3) continue;
    const Problem problem = case_problem(c, part(AnyValue{}), part(AnyValue{}));
    for (std::uint64_t seed = 1; seed <= 10; ++seed) {
      CAPTURE(c.at("load").get<std::string>());
      CAPTURE(seed);
      CHECK(best_found_db(problem, seed) > c.at("return_loss_db").get<double>() - 0.02);
    }
  }
}

TEST_CASE("the search reaches the best known optimum of ladders of 4 and 5 elements") {
  for (const auto& c : reference("search").at("cases")) {
    const int n = c.at("elements");
    if (n != 4 && n != 5) continue;
    const Problem problem = case_problem(c, part(AnyValue{}), part(AnyValue{}));
    for (std::uint64_t seed :
         n == 4 ? std::vector<std::uint64_t>{1, 2, 3} : std::vector<std::uint64_t>{1}) {
      CAPTURE(c.at("load").get<std::string>());
      CAPTURE(seed);
      CHECK(best_found_db(problem, seed) > c.at("return_loss_db").get<double>() - 0.02);
    }
  }
}

TEST_CASE("the choice of preferred values equals the enumerated optimum up to 3 elements") {
  for (const auto& c : reference("preferred-values").at("cases")) {
    if (c.at("elements") > 3) continue;
    const Series series = *series_from_name(c.at("series").get<std::string>());
    Part inductor_part = part(series);
    if (c.contains("inductor_q")) inductor_part.q = QualityFactor{c.at("inductor_q"), 1e8, 0};
    const Problem problem = case_problem(c, inductor_part, part(series));
    for (std::uint64_t seed = 1; seed <= 10; ++seed) {
      CAPTURE(c.at("load").get<std::string>());
      CAPTURE(seed);
      const double found = best_found_db(problem, seed);
      const double expected = c.at("return_loss_db");
      // The reference evaluates on the load's samples; a finer look may differ in the last digit.
      CHECK(found > expected - 2e-4);
      CHECK(found < expected + 2e-3);
    }
  }
}

TEST_CASE("a single-reactance load is matched beyond equal ripple, to the true minimax") {
  // R = 1 parallel C = 2; n counts the load's own reactance.
  struct Row {
    int added;
    double source, return_loss_db;
  };
  const Circuit load{Circuit::Type::parallel, 0, {resistor(1), capacitor(2)}};
  for (const Row& row : {Row{1, 0.447214, 8.3595}, Row{2, 0.568376, 10.2807},
                         Row{3, 0.572898, 11.3234}, Row{4, 0.608695, 11.9504}}) {
    for (std::uint64_t seed = 1; seed <= 3; ++seed) {
      CAPTURE(row.added);
      const double found = best_found_db(low_pass_problem(load, row.source, row.added, true), seed);
      CHECK(found > row.return_loss_db - 0.005);
      CHECK(found < row.return_loss_db + 0.005);
    }
  }
}

TEST_CASE("the classical three-element load is matched to its global optimum, trap or not") {
  struct Row {
    int elements;
    double source, return_loss_db;
  };
  const Circuit load{Circuit::Type::series,
                     0,
                     {inductor(2.3), {Circuit::Type::parallel, 0, {resistor(1), capacitor(1.2)}}}};
  for (const Row& row :
       {Row{1, 2.854334, 6.1481}, Row{2, 1.896241, 7.1803}, Row{3, 2.229209, 8.3894},
        Row{4, 1.911371, 8.9171}, Row{5, 2.024739, 9.4015}, Row{6, 1.888500, 9.6978},
        Row{2, 1, 6.3644}, Row{4, 1, 8.1932}, Row{3, 2.2, 8.3551}}) {
    for (std::uint64_t seed = 1; seed <= 4; ++seed) {
      CAPTURE(row.elements);
      CAPTURE(row.source);
      const double found =
          best_found_db(low_pass_problem(load, row.source, row.elements, false), seed);
      CHECK(found > row.return_loss_db - 0.005);
      CHECK(found < row.return_loss_db + 0.005);
    }
  }
}

TEST_CASE("the margin never falls when the template is widened") {
  double before = -1e9;
  for (int n = 1; n <= 4; ++n) {
    Problem problem = ladder_problem(kWhip, 1, n, 6, part(AnyValue{}), part(AnyValue{}));
    problem.rank_by = RankBy::margin;
    problem.search.designs = 1;
    RunControl control;
    const double margin = solve(problem, 2, control).designs.at(0).margin_db;
    CHECK(margin >= before - 1e-3);
    before = margin;
  }
}
