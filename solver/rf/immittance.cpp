#include "solver/rf/immittance.h"

#include <algorithm>
#include <cmath>

namespace bandwright {

Complex reflection_from_impedance(Complex impedance_ohm, double reference_ohm) {
  return (impedance_ohm - reference_ohm) / (impedance_ohm + reference_ohm);
}

Complex reflection_from_admittance(Complex admittance_s, double reference_ohm) {
  return (1.0 - reference_ohm * admittance_s) / (1.0 + reference_ohm * admittance_s);
}

Complex impedance_from_reflection(Complex reflection, double reference_ohm) {
  return reference_ohm * (1.0 + reflection) / (1.0 - reflection);
}

Complex admittance_from_reflection(Complex reflection, double reference_ohm) {
  return (1.0 - reflection) / (reference_ohm * (1.0 + reflection));
}

Complex power_wave_reflection(Complex impedance_ohm, Complex source_ohm) {
  return (impedance_ohm - std::conj(source_ohm)) / (impedance_ohm + source_ohm);
}

double return_loss_db(double reflection_magnitude) {
  if (!(reflection_magnitude > 0)) return kPerfectReturnLossDb;
  return std::min(kPerfectReturnLossDb, -20.0 * std::log10(reflection_magnitude));
}

double reflection_from_return_loss_db(double loss_db) {
  return std::pow(10.0, -loss_db / 20.0);
}

double vswr(double reflection_magnitude) {
  return (1.0 + reflection_magnitude) / (1.0 - reflection_magnitude);
}

double mismatch_loss_db(double reflection_magnitude) {
  return -10.0 * std::log10(1.0 - reflection_magnitude * reflection_magnitude);
}

}  // namespace bandwright
