// An equivalent circuit of a one-port: resistors, inductors and capacitors in series and parallel.
#pragma once

#include <vector>

#include "solver/rf/wave.h"

namespace bandwright {

struct Circuit {
  enum class Type { resistor, inductor, capacitor, series, parallel };

  Type type = Type::resistor;
  double value = 0;            // ohm, henry or farad; unused for series and parallel
  std::vector<Circuit> parts;  // for series and parallel, at least one

  // The one-port's voltage and current at `frequency_hz` > 0, up to a common factor.
  Wave wave(double frequency_hz) const;
};

}  // namespace bandwright
