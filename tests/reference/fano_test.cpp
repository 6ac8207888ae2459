// Closed-form broadband matches, evaluated by the project's own network response.

#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>
#include <numbers>
#include <vector>

#include "solver/rf/immittance.h"
#include "solver/rf/response.h"
#include "tests/reference/fano_ladder.h"

namespace bandwright {
namespace {

using reference::fano_ladder;
using reference::FanoLadder;
using std::numbers::pi;

Circuit leaf(Circuit::Type type, double value) {
  return {type, value, {}};
}

Slot ideal(Place place, Kind kind) {
  Part part;
  part.values = AnyValue{};
  return {place, kind, {1e-15, 1e6}, part, -1};
}

struct Match {
  Topology topology;
  Values values;
  OnePort load;
  double source_ohm;

  // The largest reflection over the angular frequencies `from` to `to`.
  double worst(double from, double to, int points = 4001) const {
    double worst = 0;
    for (int i = 0; i < points; ++i) {
      const double omega = from + (to - from) * i / (points - 1);
      const PortResponse response = respond(topology, values, OnePort::constant(source_ohm), load,
                                            std::max(omega, 1e-9) / (2 * pi));
      worst = std::max(worst, std::abs(response.reflection));
    }
    return worst;
  }
};

// The low-pass ladder behind a shunt R-C load, its elements from the source to the load.
Match low_pass(const FanoLadder& ladder) {
  Match match{{},
              {},
              OnePort::from_circuit({Circuit::Type::parallel,
                                     0,
                                     {leaf(Circuit::Type::resistor, 1),
                                      leaf(Circuit::Type::capacitor, ladder.g[0])}}),
              ladder.source_resistance};
  for (std::size_t i = ladder.g.size(); i-- > 1;) {
    match.topology.slots.push_back(i % 2 == 1 ? ideal(Place::series, Kind::inductor)
                                              : ideal(Place::shunt, Kind::capacitor));
    match.values.push_back(ladder.g[i]);
  }
  return match;
}

TEST_CASE("the equal-ripple optimum agrees with Fano's figures for one to ten reactances") {
  // Largest reflection by decrement and number of reactances; computed from the formulas of Fano
  // (1950) and Levy (1964) and confirmed by simulation.
  const int kCounts[] = {1, 2, 3, 4, 5, 6, 8, 10};
  struct Row {
    double decrement;
    double reflection[8];
  };
  const Row kRows[] = {
      {0.1, {0.90499, 0.81900, 0.78579, 0.76906, 0.75927, 0.75298, 0.74553, 0.74139}},
      {0.2, {0.81980, 0.67208, 0.61849, 0.59223, 0.57709, 0.56745, 0.55613, 0.54988}},
      {0.3, {0.74403, 0.55358, 0.48839, 0.45722, 0.43951, 0.42832, 0.41530, 0.40816}},
      {0.5, {0.61803, 0.38197, 0.30909, 0.27579, 0.25735, 0.24591, 0.23280, 0.22574}},
      {0.7, {0.52066, 0.27108, 0.20072, 0.16991, 0.15329, 0.14316, 0.13176, 0.12572}},
      {1.0, {0.41421, 0.17157, 0.11101, 0.08615, 0.07331, 0.06572, 0.05742, 0.05315}},
      {1.5, {0.30278, 0.09167, 0.04774, 0.03169, 0.02407, 0.01983, 0.01548, 0.01338}},
      {2.0, {0.23607, 0.05573, 0.02385, 0.01354, 0.00909, 0.00679, 0.00462, 0.00365}}};
  for (const Row& row : kRows) {
    for (int i = 0; i < 8; ++i) {
      const double found = fano_ladder(kCounts[i], row.decrement).largest_reflection;
      CHECK(std::abs(found - row.reflection[i]) < 6e-6);
      CHECK(found > std::exp(-pi * row.decrement));
    }
    const double root = std::sqrt(1 + row.decrement * row.decrement) - row.decrement;
    CHECK(fano_ladder(1, row.decrement).largest_reflection == doctest::Approx(root).epsilon(1e-12));
    CHECK(fano_ladder(2, row.decrement).largest_reflection ==
          doctest::Approx(root * root).epsilon(1e-12));
  }
}

TEST_CASE("Levy's element values at a decrement of one half are the tabulated ones") {
  struct Row {
    double a, b, largest, smallest;
    std::vector<double> g;
    double source;
  };
  const std::vector<Row> kRows{
      {1.258503, 0.584227, 0.618034, 0.381966, {2}, 0.447214},
      {0.979704, 0.424181, 0.381966, 0.274324, {2, 0.400000}, 0.447214},
      {0.782835, 0.357608, 0.309090, 0.248842, {2, 0.759839, 1.351057}, 0.601484},
      {0.654283, 0.314100, 0.275788, 0.236951, {2, 0.909180, 2.354822, 0.425421}, 0.567659},
      {0.564387,
       0.282059,
       0.257352,
       0.230037,
       {2, 0.988296, 2.651438, 0.844578, 1.121140},
       0.625967},
      {0.497896,
       0.257064,
       0.245906,
       0.225538,
       {2, 1.036571, 2.769118, 1.008316, 2.218292, 0.402379},
       0.605257}};
  for (const Row& row : kRows) {
    const FanoLadder found = fano_ladder(static_cast<int>(row.g.size()), 0.5);
    CHECK(std::abs(found.a - row.a) < 1e-6);
    CHECK(std::abs(found.b - row.b) < 1e-6);
    CHECK(std::abs(found.largest_reflection - row.largest) < 1e-6);
    CHECK(std::abs(found.smallest_reflection - row.smallest) < 1e-6);
    CHECK(std::abs(found.source_resistance - row.source) < 1e-6);
    for (std::size_t i = 0; i < row.g.size(); ++i) CHECK(std::abs(found.g[i] - row.g[i]) < 1e-6);
  }
}

TEST_CASE("the simulated ladder has the ripple its synthesis promises") {
  for (const double decrement : {0.2, 0.5, 1.0}) {
    for (int n = 1; n <= 8; ++n) {
      const FanoLadder ladder = fano_ladder(n, decrement);
      const double worst = low_pass(ladder).worst(0, 1);
      CHECK(worst == doctest::Approx(ladder.largest_reflection).epsilon(1e-7));
    }
  }
}

TEST_CASE("the band-pass form matches a resonant antenna as Fano's theory says") {
  // Series R-L-C, 50 ohm, 1 GHz, Q 10, 10 % band: decrement 1. Values computed by denormalising.
  constexpr double kOhm = 50, kHz = 1e9, kQ = 10, kBand = 0.1;
  const double omega0 = 2 * pi * kHz;
  const double width = omega0 * kBand;
  const double inductance = kQ * kOhm / omega0;
  CHECK(inductance == doctest::Approx(79.577472e-9).epsilon(1e-7));
  const OnePort antenna = OnePort::from_circuit(
      {Circuit::Type::series,
       0,
       {leaf(Circuit::Type::resistor, kOhm), leaf(Circuit::Type::inductor, inductance),
        leaf(Circuit::Type::capacitor, 1 / (omega0 * omega0 * inductance))}});
  const double kPublished[] = {0.414214, 0.171573, 0.111011, 0.086154};
  const double half = omega0 * kBand / 2;
  const double centre = std::sqrt(omega0 * omega0 + half * half);
  for (int n = 1; n <= 4; ++n) {
    const FanoLadder ladder = fano_ladder(n, 1 / (kQ * kBand));
    // Dual of the low-pass case: odd positions are series branches, resistances invert.
    Match match{{}, {}, antenna, kOhm / ladder.source_resistance};
    for (int i = n - 1; i >= 1; --i) {
      const bool shunt = i % 2 == 1;
      const double storing = shunt ? ladder.g[i] / (kOhm * width) : kOhm * ladder.g[i] / width;
      const double tuning = 1 / (omega0 * omega0 * storing);
      const Place place = shunt ? Place::shunt : Place::series;
      match.topology.slots.push_back(ideal(place, Kind::inductor));
      match.values.push_back(shunt ? tuning : storing);
      match.topology.slots.push_back(ideal(place, Kind::capacitor));
      match.values.push_back(shunt ? storing : tuning);
    }
    const double worst = match.worst(centre - half, centre + half);
    CHECK(std::abs(worst - kPublished[n - 1]) < 2e-6);
  }
}

TEST_CASE("the best known matches of the classical load are reproduced, loss-free") {
  // Series 2.3 H, then 1 ohm || 1.2 F, band 0 to 1 rad/s: the example load of Carlin, IEEE Trans.
  // CAS-24, 1977. Values computed by multi-start minimax; the load's own floor is 0.2797882.
  const OnePort load = OnePort::from_circuit(
      {Circuit::Type::series,
       0,
       {leaf(Circuit::Type::inductor, 2.3),
        {Circuit::Type::parallel,
         0,
         {leaf(Circuit::Type::resistor, 1), leaf(Circuit::Type::capacitor, 1.2)}}}});
  struct Row {
    std::vector<double> from_load;
    double source, reflection;
  };
  const std::vector<Row> kRows{
      {{0.538175}, 2.854334, 0.492715},
      {{0.852627, 1.730831}, 1.896241, 0.437508},
      {{0.972587, 3.035119, 0.409568}, 2.229209, 0.380654},
      {{1.050851, 3.217856, 0.774032, 1.441872}, 1.911371, 0.358216},
      {{1.094292, 3.315562, 0.901024, 2.851008, 0.358111}, 2.024739, 0.338787},
      {{1.127516, 3.321808, 0.972160, 3.243442, 0.740424, 1.244051}, 1.888500, 0.327424}};
  for (const Row& row : kRows) {
    Match match{{}, {}, load, row.source};
    for (std::size_t i = row.from_load.size(); i-- > 0;) {
      match.topology.slots.push_back(i % 2 == 0 ? ideal(Place::shunt, Kind::capacitor)
                                                : ideal(Place::series, Kind::inductor));
      match.values.push_back(row.from_load[i]);
    }
    const double worst = match.worst(0, 1);
    CHECK(std::abs(worst - row.reflection) < 3e-6);
    CHECK(worst > 0.2797882);
    const PortResponse middle =
        respond(match.topology, match.values, OnePort::constant(row.source), load, 0.5 / (2 * pi));
    CHECK(middle.transducer_gain ==
          doctest::Approx(1 - std::norm(middle.reflection)).epsilon(1e-12));
  }
}

}  // namespace
}  // namespace bandwright
