// The problems that the benchmarks and the quality table are made of: loads from tests/data/loads,
// ladders of ideal or real parts.
#pragma once

#include <string>

#include "solver/rf/problem.h"
#include "solver/rf/template.h"

namespace bandwright::benchmark_cases {

// A measured load and the band it is to be matched over.
struct Antenna {
  std::string file;
  double from_hz = 0;
  double to_hz = 0;
  double goal_db = 0;
};
inline const Antenna kWhip{"whip-120-180mhz.s1p", 140e6, 160e6, 5.5};
inline const Antenna kDipole{"dipole-700-1060mhz.s1p", 824e6, 960e6, 12.0};

// Throws std::runtime_error if the file cannot be read.
OnePort read_load(const std::string& file);

Part ideal_part();            // any value, no loss
Part preferred_part(Series);  // 5 %, no loss
// Inductors with Q and self-resonance; capacitors with resistance and series inductance.
Part real_inductor();
Part real_capacitor();
// Inductors and capacitors with a Q alone.
Part part_with_q(double q);

// A problem with one return-loss goal of at least `goal_db`, a 50 ohm source and no topologies yet.
// Ranked by margin, without the physical limit.
Problem antenna_problem(const Antenna& antenna);
// Every alternating ladder of `least` to `most` inductors and capacitors.
std::vector<Topology> ladders(const Problem& problem, int least, int most, const Part& inductor,
                              const Part& capacitor);
// One ladder of `elements`: capacitors in series, inductors in shunt, and so on, the kinds changing
// with every pair, so that every kind stands in every place.
Topology mixed_ladder(int elements, const Part& inductor, const Part& capacitor);

}  // namespace bandwright::benchmark_cases
