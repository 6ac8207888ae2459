// Seeded random matching problems of lossy parts, for the comparisons with outside programs.
#pragma once

#include <cmath>
#include <numbers>
#include <vector>

#include "solver/base/random.h"
#include "solver/rf/one_port.h"
#include "solver/rf/topology.h"

namespace bandwright::reference {

// The load of a random case: three parts in one of three connections.
enum class LoadForm {
  series,      // resistor, inductor and capacitor in series
  lossy_tank,  // resistor and inductor in series, the capacitor across both
  series_coil  // the inductor, then resistor and capacitor in parallel
};

struct RandomCase {
  Topology topology;
  Values values;
  double source_ohm = 0;
  LoadForm form = LoadForm::series;
  double load_ohm = 0;
  double load_henry = 0;
  double load_farad = 0;

  OnePort load() const {
    using Type = Circuit::Type;
    const Circuit r{Type::resistor, load_ohm, {}};
    const Circuit l{Type::inductor, load_henry, {}};
    const Circuit c{Type::capacitor, load_farad, {}};
    switch (form) {
      case LoadForm::series:
        return OnePort::from_circuit({Type::series, 0, {r, l, c}});
      case LoadForm::lossy_tank:
        return OnePort::from_circuit({Type::parallel, 0, {{Type::series, 0, {r, l}}, c}});
      case LoadForm::series_coil:
        break;
    }
    return OnePort::from_circuit({Type::series, 0, {l, {Type::parallel, 0, {r, c}}}});
  }
};

inline constexpr double kFrequenciesHz[] = {50e6, 87.3e6, 150e6, 270e6, 433.92e6};

namespace detail {

// Draws one number after another.
class Draw {
 public:
  explicit Draw(const RandomStream& stream) : stream_(stream) {}
  bool coin() { return stream_.bits(next_++) & 1; }
  int below(int count) { return static_cast<int>(stream_.bits(next_++) % count); }
  double between(double low, double high) {
    return low * std::exp(std::log(high / low) * stream_.uniform(next_++));
  }

 private:
  RandomStream stream_;
  std::uint64_t next_ = 0;
};

// Reactances of 5 to 500 ohm at the middle of the frequencies.
inline double inductance(Draw& draw) {
  return draw.between(5, 500) / (2 * std::numbers::pi * 150e6);
}
inline double capacitance(Draw& draw) {
  return 1 / (2 * std::numbers::pi * 150e6 * draw.between(5, 500));
}

inline double add_slot(Draw& draw, Topology& topology) {
  Slot slot;
  slot.place = draw.coin() ? Place::series : Place::shunt;
  const int kind = draw.below(5);
  if (kind < 2) {
    slot.kind = Kind::inductor;
    slot.part.q = QualityFactor{draw.between(10, 100), draw.between(50e6, 500e6), 0.5};
    if (draw.coin()) slot.part.self_resonance_hz = draw.between(0.3e9, 3e9);
  } else if (kind < 4) {
    slot.kind = Kind::capacitor;
    slot.part.esr_ohm = draw.between(0.02, 1);
    slot.part.self_inductance_h = draw.coin() ? draw.between(0.2e-9, 1e-9) : 0;
    if (draw.coin()) slot.part.q = QualityFactor{draw.between(100, 1000), 100e6, -0.5};
  } else {
    slot.kind = Kind::resistor;
  }
  topology.slots.push_back(slot);
  if (slot.kind == Kind::inductor) return inductance(draw);
  return slot.kind == Kind::capacitor ? capacitance(draw) : draw.between(1, 500);
}

}  // namespace detail

inline std::vector<RandomCase> random_cases(int count, std::uint64_t seed) {
  std::vector<RandomCase> cases;
  for (int k = 0; k < count; ++k) {
    detail::Draw draw(RandomStream(seed, k));
    RandomCase one;
    for (int elements = 1 + draw.below(6); elements > 0; --elements) {
      one.values.push_back(detail::add_slot(draw, one.topology));
    }
    one.source_ohm = draw.between(5, 300);
    one.form = static_cast<LoadForm>(draw.below(3));
    one.load_ohm = draw.between(2, 300);
    one.load_henry = detail::inductance(draw);
    one.load_farad = detail::capacitance(draw);
    cases.push_back(one);
  }
  return cases;
}

}  // namespace bandwright::reference
