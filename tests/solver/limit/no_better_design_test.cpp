// No design is ever better than the limit: random loads, bands and ladders, and a crude search that
// improves the ladders as far as it can.

#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>

#include "solver/base/random.h"
#include "solver/rf/response.h"
#include "tests/solver/limit/limit_fixture.h"

namespace bandwright {
namespace {

using namespace limit_fixture;

class Draw {
 public:
  explicit Draw(std::uint64_t stream) : stream_(19, stream) {}
  double uniform() { return stream_.uniform(next_++); }
  int below(int count) { return static_cast<int>(uniform() * count); }
  // Uniform in the logarithm.
  double between(double low, double high) { return low * std::pow(high / low, uniform()); }

 private:
  RandomStream stream_;
  std::uint64_t next_ = 0;
};

constexpr double kCentreHz = 100e6;

double random_inductance(Draw& draw) {
  return draw.between(0.05, 5) * 50 / (2 * std::numbers::pi * kCentreHz);
}
double random_capacitance(Draw& draw) {
  return draw.between(0.05, 5) / (50 * 2 * std::numbers::pi * kCentreHz);
}

// A resistor with one to four reactances around it.
Circuit random_circuit(Draw& draw) {
  Circuit circuit = resistor(draw.between(5, 500));
  for (int count = 1 + draw.below(4); count > 0; --count) {
    const Circuit next =
        draw.below(2) ? inductor(random_inductance(draw)) : capacitor(random_capacitance(draw));
    circuit = draw.below(2) ? series({circuit, next}) : parallel({circuit, next});
  }
  return circuit;
}

BandRange random_band(Draw& draw) {
  const double ratio = draw.between(1.02, 2.5);
  return {kCentreHz / std::sqrt(ratio), kCentreHz * std::sqrt(ratio)};
}

Topology random_ladder(Draw& draw, double esr_ohm) {
  Topology topology;
  for (int count = 1 + draw.below(4); count > 0; --count) {
    Slot slot;
    slot.place = count % 2 ? Place::series : Place::shunt;
    slot.kind = draw.below(2) ? Kind::inductor : Kind::capacitor;
    slot.range = {1e-15, 1};
    slot.part.values = AnyValue{};
    slot.part.esr_ohm = esr_ohm;
    topology.slots.push_back(slot);
  }
  return topology;
}

struct Case {
  OnePort source;
  OnePort load;
  std::vector<BandRange> bands;
};

// The worst transducer gain at 33 frequencies of each band, edges included.
double worst_gain_db(const Case& c, const Topology& topology, const Values& values) {
  double worst = 1;
  for (const BandRange& band : c.bands) {
    for (int i = 0; i <= 32; ++i) {
      const double f = band.from_hz + (band.to_hz - band.from_hz) * i / 32;
      worst = std::min(worst, respond(topology, values, c.source, c.load, f).transducer_gain);
    }
  }
  return 10 * std::log10(std::max(worst, 1e-20));
}

// The best of random starts, each improved by random steps that shrink.
double best_gain_db(const Case& c, Draw& draw, double esr_ohm) {
  double best = -200;
  for (int start = 0; start < 6; ++start) {
    const Topology topology = random_ladder(draw, esr_ohm);
    Values values;
    for (const Slot& slot : topology.slots) {
      values.push_back(slot.kind == Kind::inductor ? random_inductance(draw)
                                                   : random_capacitance(draw));
    }
    double held = worst_gain_db(c, topology, values);
    for (int step = 0; step < 250; ++step) {
      Values moved = values;
      for (double& value : moved) {
        value *= std::exp(2 * (draw.uniform() - 0.5) * std::pow(0.97, step));
      }
      const double gain = worst_gain_db(c, topology, moved);
      if (gain > held) {
        held = gain;
        values = moved;
      }
    }
    best = std::max(best, held);
  }
  return best;
}

MatchLimit limit_for(const Case& c) {
  return match_limit(c.source, c.load, c.bands, {3, 0});
}

TEST_CASE("no ladder found for a random load is better than the limit") {
  double closest_db = 200;
  for (std::uint64_t n = 0; n < 30; ++n) {
    Draw draw(n);
    const Case c{OnePort::constant(draw.between(10, 250)),
                 OnePort::from_circuit(random_circuit(draw)),
                 {random_band(draw)}};
    const double limit_db = limit_for(c).gain_db;
    const double best_db = best_gain_db(c, draw, 0);
    CHECK(best_db <= limit_db + 1e-4);
    closest_db = std::min(closest_db, limit_db - best_db);
  }
  // Some loads are easy: the search comes near the limit, so the test can tell a wrong one.
  CHECK(closest_db < 0.1);
}

TEST_CASE("no ladder found for two bands at once is better than their common limit") {
  for (std::uint64_t n = 100; n < 106; ++n) {
    Draw draw(n);
    const Case c{
        OnePort::constant(50),
        OnePort::from_circuit(random_circuit(draw)),
        {{70e6, 70e6 * draw.between(1.05, 1.3)}, {120e6, 120e6 * draw.between(1.05, 1.3)}}};
    CHECK(best_gain_db(c, draw, 0) <= limit_for(c).gain_db + 1e-4);
  }
}

TEST_CASE("no lossy ladder is better than the limit of the gain") {
  for (std::uint64_t n = 200; n < 210; ++n) {
    Draw draw(n);
    const Case c{
        OnePort::constant(50), OnePort::from_circuit(random_circuit(draw)), {random_band(draw)}};
    CHECK(best_gain_db(c, draw, draw.between(0.01, 5)) <= limit_for(c).gain_db + 1e-4);
  }
}

TEST_CASE("no ladder found between a reactive source and a load is better than the limit") {
  for (std::uint64_t n = 300; n < 312; ++n) {
    Draw draw(n);
    // Every third source is a reactance that no passive circuit has.
    const OnePort source = n % 3 ? OnePort::from_circuit(random_circuit(draw))
                                 : OnePort::constant({50, draw.between(5, 100)});
    const Case c{source, OnePort::from_circuit(random_circuit(draw)), {random_band(draw)}};
    CHECK(best_gain_db(c, draw, 0) <= limit_for(c).gain_db + 1e-4);
  }
}

}  // namespace
}  // namespace bandwright
