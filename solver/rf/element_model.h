// The impedance of one element as an affine function of its value.
//
// Every lumped kind, with all its losses and parasitics, has Z = per_x * x + fixed at one
// frequency, where x is the value or its reciprocal. The ladder's tables and the reference
// response both come from here, so there is one place where a part's physics is written down.
#pragma once

#include "solver/rf/immittance.h"
#include "solver/rf/topology.h"

namespace bandwright {

struct ElementModel {
  Complex per_x;
  Complex fixed;
};

// True if x is the reciprocal of the value (capacitors).
bool uses_reciprocal(Kind kind);

// Inductor: per_x = (w/Q + jw) / (1 - u^2 + j u^2/Q) with u = f / self-resonance, plus the
// resistance. Capacitor: per_x = 1/(wQ) - j/w (+ jw/wr^2 with a self-resonance), plus resistance
// and series inductance. Resistor: per_x = 1, plus series inductance. Circuit identities.
ElementModel element_model(Kind kind, const Part& part, double frequency_hz);

Complex element_impedance_ohm(const Slot& slot, double value, double frequency_hz);

}  // namespace bandwright
