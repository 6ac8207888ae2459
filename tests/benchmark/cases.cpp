#include "tests/benchmark/cases.h"

#include <fstream>
#include <iterator>
#include <stdexcept>

#include "solver/rf/touchstone.h"

namespace bandwright::benchmark_cases {

OnePort read_load(const std::string& file) {
  const std::string path = std::string(BANDWRIGHT_SOURCE_DIR) + "/tests/data/loads/" + file;
  std::ifstream stream(path);
  const std::string text{std::istreambuf_iterator<char>(stream), {}};
  const auto network = parse_touchstone(text, 1);
  if (!network.ok()) throw std::runtime_error(path + " cannot be read");
  return OnePort::from_reflection(network->frequency_hz, network->scattering,
                                  network->reference_ohm[0]);
}

Part ideal_part() {
  Part part;
  part.values = AnyValue{};
  return part;
}

Part preferred_part(Series series) {
  Part part;
  part.values = series;
  return part;
}

Part real_inductor() {
  Part part;
  part.q = QualityFactor{60, 150e6, 0.5};
  part.self_resonance_hz = 1.2e9;
  return part;
}

Part real_capacitor() {
  Part part;
  part.tolerance = {0.02, 0};
  part.esr_ohm = 0.15;
  part.self_inductance_h = 0.4e-9;
  return part;
}

Part part_with_q(double q) {
  Part part;
  part.q = QualityFactor{q, 1, 0};
  return part;
}

Problem antenna_problem(const Antenna& antenna) {
  Problem problem;
  problem.loads = {{antenna.file, read_load(antenna.file)}};
  problem.goals = {Goal{GoalQuantity::return_loss, GoalBound::at_least, antenna.from_hz,
                        antenna.to_hz, antenna.goal_db, 1}};
  problem.rank_by = RankBy::margin;
  problem.wants_limit = false;
  return problem;
}

std::vector<Topology> ladders(const Problem& problem, int least, int most, const Part& inductor,
                              const Part& capacitor) {
  const LadderRule rule{
      least,
      most,
      {{Kind::inductor, std::nullopt, inductor}, {Kind::capacitor, std::nullopt, capacitor}}};
  const double centre_hz = centre_frequency_hz(problem.goals);
  return *expand(rule, centre_hz, source_resistance_ohm(problem.source, centre_hz));
}

Topology mixed_ladder(int elements, const Part& inductor, const Part& capacitor) {
  Topology topology;
  for (int i = 0; i < elements; ++i) {
    const bool series = i % 2 == 0;
    const bool is_inductor = i % 4 == 1 || i % 4 == 2;
    Slot slot;
    slot.place = series ? Place::series : Place::shunt;
    slot.kind = is_inductor ? Kind::inductor : Kind::capacitor;
    slot.part = is_inductor ? inductor : capacitor;
    slot.range = is_inductor ? ValueRange{1e-9, 1e-6} : ValueRange{1e-13, 1e-9};
    topology.slots.push_back(slot);
  }
  return topology;
}

}  // namespace bandwright::benchmark_cases
