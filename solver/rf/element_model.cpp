#include "solver/rf/element_model.h"

#include <numbers>

namespace bandwright {
namespace {

ElementModel inductor_model(const Part& part, double frequency_hz) {
  const double w = 2 * std::numbers::pi * frequency_hz;
  const double d = part.q ? 1 / part.q->at(frequency_hz) : 0.0;
  Complex per_henry(w * d, w);
  if (part.self_resonance_hz) {
    const double u = frequency_hz / *part.self_resonance_hz;
    per_henry /= Complex(1 - u * u, u * u * d);
  }
  return {per_henry, Complex(part.esr_ohm, 0)};
}

ElementModel capacitor_model(const Part& part, double frequency_hz) {
  const double w = 2 * std::numbers::pi * frequency_hz;
  const double d = part.q ? 1 / part.q->at(frequency_hz) : 0.0;
  Complex per_reciprocal_farad(d / w, -1 / w);
  if (part.self_resonance_hz) {
    const double wr = 2 * std::numbers::pi * *part.self_resonance_hz;
    per_reciprocal_farad += Complex(0, w / (wr * wr));
  }
  return {per_reciprocal_farad, Complex(part.esr_ohm, w * part.self_inductance_h)};
}

}  // namespace

bool uses_reciprocal(Kind kind) {
  return kind == Kind::capacitor;
}

ElementModel element_model(Kind kind, const Part& part, double frequency_hz) {
  switch (kind) {
    case Kind::inductor:
      return inductor_model(part, frequency_hz);
    case Kind::capacitor:
      return capacitor_model(part, frequency_hz);
    case Kind::resistor:
      break;
  }
  return {1.0, Complex(0, 2 * std::numbers::pi * frequency_hz * part.self_inductance_h)};
}

Complex element_impedance_ohm(const Slot& slot, double value, double frequency_hz) {
  const ElementModel model = element_model(slot.kind, slot.part, frequency_hz);
  return model.per_x * (uses_reciprocal(slot.kind) ? 1 / value : value) + model.fixed;
}

}  // namespace bandwright
