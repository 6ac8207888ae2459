#include "tests/benchmark/reference_file.h"

#include <fstream>
#include <nlohmann/json.hpp>

#include "tests/benchmark/cases.h"

namespace bandwright::quality {
namespace {

using nlohmann::json;
using namespace benchmark_cases;

Part part_of(const ReferenceCase& c, Kind kind) {
  Part part;
  if (c.series.empty()) {
    part = ideal_part();
  } else {
    part = preferred_part(*series_from_name(c.series));
  }
  part.tolerance = {c.tolerance, 0};
  if (kind == Kind::inductor && c.inductor_q > 0) part.q = QualityFactor{c.inductor_q, 1, 0};
  return part;
}

void read_network(const json& network, ReferenceCase& c) {
  for (const json& element : network) {
    Slot slot;
    slot.place = element.at("place") == "series" ? Place::series : Place::shunt;
    slot.kind = element.at("kind") == "inductor" ? Kind::inductor : Kind::capacitor;
    slot.part = part_of(c, slot.kind);
    const char* key = slot.kind == Kind::inductor ? "inductance_h" : "capacitance_f";
    const double value = element.at(key);
    slot.range = {value, value};
    c.topology.slots.push_back(slot);
    c.values.push_back(value);
  }
}

ReferenceCase read_case(const json& in) {
  ReferenceCase c;
  c.load = in.at("load");
  c.elements = in.at("elements");
  c.series = in.value("series", "");
  c.inductor_q = in.value("inductor_q", 0.0);
  c.goal_db = in.value("goal_db", 0.0);
  c.tolerance = in.value("tolerance_percent", 5.0) / 100;
  const json& best = in.contains("yield_best") ? in.at("yield_best") : in;
  c.return_loss_db = best.at("return_loss_db");
  c.yield = best.value("yield", 0.0);
  read_network(best.at("network"), c);
  c.problem = antenna_problem({in.at("file"), in.at("from_hz"), in.at("to_hz"), c.goal_db});
  if (c.goal_db == 0) c.problem.goals[0].bound = GoalBound::best;
  c.problem.tolerance.samples = 0;
  c.problem.topologies = ladders(c.problem, c.elements, c.elements, part_of(c, Kind::inductor),
                                 part_of(c, Kind::capacitor));
  return c;
}

}  // namespace

std::vector<ReferenceCase> read_reference(const std::string& file) {
  std::ifstream stream(std::string(BANDWRIGHT_SOURCE_DIR) + "/tests/data/reference/" + file);
  const json whole = json::parse(stream);
  std::vector<ReferenceCase> cases;
  for (const json& in : whole.at("cases")) cases.push_back(read_case(in));
  return cases;
}

}  // namespace bandwright::quality
