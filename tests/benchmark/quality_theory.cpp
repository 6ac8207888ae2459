// Rows from published theory: low-pass ladders behind loads of one and of three reactances.
//
// One reactance: the problem of Fano (J. Franklin Inst. 249, 1950) with decrement 0.5, R = 1 and
// C = 2. For three and more elements the equal-ripple match is not the best one (Carlin and
// Amstutz, IEEE Trans. CAS-28, 1981); the figures here are the true minimax values, computed by
// brute force for this project. Three reactances: L = 2.3 in series with R = 1 and C = 1.2 in
// parallel, the load of Carlin (IEEE Trans. CAS-24, 1977), with values computed likewise. Both on
// the band 0 to 1 rad/s, here scaled to 100 MHz and 50 ohm.

#include <cmath>
#include <numbers>
#include <string>

#include "tests/benchmark/cases.h"
#include "tests/benchmark/quality.h"

namespace bandwright::quality {
namespace {

constexpr double kEdgeHz = 100e6;
constexpr double kResistanceOhm = 50;
constexpr double kRadians = 2 * std::numbers::pi * kEdgeHz;
constexpr double kHenry = kResistanceOhm / kRadians;        // of a unit inductance
constexpr double kFarad = 1 / (kResistanceOhm * kRadians);  // of a unit capacitance
// The band's lower edge is zero in theory; there these networks hardly differ from zero frequency.
constexpr double kLowestHz = 1e-4 * kEdgeHz;
constexpr double kWidest = 50;
constexpr double kSlackDb = 0.005;
constexpr int kCheckPoints = 20001;

Circuit leaf(Circuit::Type type, double value) {
  return {type, value, {}};
}

Circuit fano_load() {
  using Type = Circuit::Type;
  return {Type::parallel,
          0,
          {leaf(Type::resistor, kResistanceOhm), leaf(Type::capacitor, 2.0 * kFarad)}};
}

Circuit carlin_load() {
  using Type = Circuit::Type;
  const Circuit end{Type::parallel,
                    0,
                    {leaf(Type::resistor, kResistanceOhm), leaf(Type::capacitor, 1.2 * kFarad)}};
  return {Type::series, 0, {leaf(Type::inductor, 2.3 * kHenry), end}};
}

// A low-pass ladder whose element next to the load has the given place.
Topology low_pass(int elements, Place next_to_load) {
  Topology topology;
  for (int i = 0; i < elements; ++i) {
    const bool same = (elements - 1 - i) % 2 == 0;
    const bool series = (next_to_load == Place::series) == same;
    const double unit = series ? kHenry : kFarad;
    Slot slot;
    slot.place = series ? Place::series : Place::shunt;
    slot.kind = series ? Kind::inductor : Kind::capacitor;
    slot.range = {unit / kWidest, unit * kWidest};
    slot.part = benchmark_cases::ideal_part();
    topology.slots.push_back(slot);
  }
  return topology;
}

struct TheoryCase {
  std::string name;
  int elements;  // the load's own not counted
  double source;
  double return_loss_db;
};

void rows_of(const std::vector<TheoryCase>& cases, const Circuit& load, Place next_to_load,
             const Settings& settings, Table& table) {
  for (const TheoryCase& c : cases) {
    Problem problem;
    problem.loads = {{"load", OnePort::from_circuit(load)}};
    problem.source = OnePort::constant(c.source * kResistanceOhm);
    problem.goals = {Goal{GoalQuantity::return_loss, GoalBound::best, kLowestHz, kEdgeHz, 0, 1}};
    problem.topologies = {low_pass(c.elements, next_to_load)};
    problem.tolerance.samples = 0;
    problem.rank_by = RankBy::margin;
    problem.search.designs = 1;
    problem.wants_limit = false;
    table.row({c.name, c.return_loss_db, kSlackDb, 1.0}, settings.seeds(20),
              [&](std::uint64_t seed) {
                const Solved solved = solve_timed(problem, seed, settings);
                const Design& first = solved.report.designs.front();
                const double reached =
                    worst_return_loss_db(problem, first.topology, first.values, kCheckPoints);
                return Outcome{reached - c.return_loss_db, solved.seconds};
              });
  }
}

double loss_db(double reflection) {
  return -20 * std::log10(reflection);
}

}  // namespace

void theory_rows(const Settings& settings, Table& table) {
  table.section("Low-pass ladders in theory: within 0.005 dB of the best possible", "dB");
  rows_of({{"R C load, 1 element", 1, 0.447214, loss_db(0.3819660)},
           {"R C load, 2 elements", 2, 0.568376, loss_db(0.3061712)},
           {"R C load, 3 elements", 3, 0.572898, loss_db(0.2715382)},
           {"R C load, 4 elements", 4, 0.608695, loss_db(0.2526280)}},
          fano_load(), Place::series, settings, table);
  rows_of({{"L R C load, 1 element", 1, 2.854334, loss_db(0.492715)},
           {"L R C load, 2 elements", 2, 1.896241, loss_db(0.437508)},
           {"L R C load, 3 elements", 3, 2.229209, loss_db(0.380654)},
           {"L R C load, 4 elements", 4, 1.911371, loss_db(0.358216)},
           {"L R C load, 5 elements", 5, 2.024739, loss_db(0.338787)},
           {"L R C load, 6 elements", 6, 1.888500, loss_db(0.327424)},
           {"L R C load, source 1, 1 element", 1, 1, 2.081},
           {"L R C load, source 1, 2 elements", 2, 1, 6.3644},
           {"L R C load, source 1, 3 elements", 3, 1, 6.4329},
           {"L R C load, source 1, 4 elements", 4, 1, 8.1932},
           {"L R C load, source 1, 5 elements", 5, 1, 8.2209},
           {"L R C load, source 2.2, 2 elements", 2, 2.2, 7.0796},
           {"L R C load, source 2.2, 3 elements", 3, 2.2, 8.3551},
           {"L R C load, source 2.2, 4 elements", 4, 2.2, 8.5194}},
          carlin_load(), Place::shunt, settings, table);
}

}  // namespace bandwright::quality
