// Ready-made problems on the three sampled antennas.
#pragma once

#include <fstream>
#include <sstream>
#include <stdexcept>
#include <string>

#include "solver/rf/problem.h"
#include "solver/rf/template.h"
#include "solver/rf/touchstone.h"

namespace bandwright::test {

inline std::string read_file(const std::string& path) {
  std::ifstream in(path);
  if (!in) throw std::runtime_error("cannot read " + path);
  std::ostringstream out;
  out << in.rdbuf();
  return out.str();
}

inline OnePort antenna(const std::string& file) {
  const auto data = parse_touchstone(
      read_file(std::string(BANDWRIGHT_SOURCE_DIR) + "/tests/data/loads/" + file), 1);
  return OnePort::from_reflection(data->frequency_hz, data->scattering, data->reference_ohm[0]);
}

struct Antenna {
  const char* file;
  double from_hz, to_hz;
};
inline constexpr Antenna kWhip{"whip-120-180mhz.s1p", 140e6, 160e6};
inline constexpr Antenna kDipole{"dipole-700-1060mhz.s1p", 824e6, 960e6};
inline constexpr Antenna kInvertedL{"inverted-l-400-470mhz.s1p", 430e6, 440e6};

inline Part part(ValueRule values) {
  Part out;
  out.values = std::move(values);
  return out;
}

// All ladders of `from` to `to` inductors and capacitors; return loss at least `at_least_db`.
inline Problem ladder_problem(const Antenna& which, int from, int to, double at_least_db,
                              const Part& inductor = part(Series::e24),
                              const Part& capacitor = part(Series::e24)) {
  Problem problem;
  problem.loads.push_back({"", antenna(which.file)});
  Goal goal;
  goal.from_hz = which.from_hz;
  goal.to_hz = which.to_hz;
  goal.bound_db = at_least_db;
  problem.goals = {goal};
  problem.tolerance.samples = 0;
  const LadderRule rule{
      from, to, {{Kind::inductor, {}, inductor}, {Kind::capacitor, {}, capacitor}}};
  problem.topologies = *expand(rule, centre_frequency_hz(problem.goals), 50);
  return problem;
}

}  // namespace bandwright::test
