// The state at a port as a voltage and a current, up to a common complex factor.
//
// Z = voltage / current. Keeping the two apart makes open and short circuits ordinary numbers and
// lets a ladder be evaluated without a division.
#pragma once

#include "solver/rf/immittance.h"

namespace bandwright {

struct Wave {
  Complex voltage;
  Complex current;

  // From a reflection coefficient at a real reference: V = 1 + S, I = (1 - S) / R.
  static Wave from_reflection(Complex reflection, double reference_ohm) {
    return {1.0 + reflection, (1.0 - reflection) / reference_ohm};
  }
  Complex reflection(double reference_ohm) const {
    return (voltage - reference_ohm * current) / (voltage + reference_ohm * current);
  }
  Complex impedance_ohm() const { return voltage / current; }
};

}  // namespace bandwright
