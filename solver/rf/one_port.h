// A one-port known over frequency: a load, or a source's impedance.
//
// Samples are interpolated by a cubic spline ("not-a-knot" end conditions; linear for 2 samples,
// parabola for 3) through the real and imaginary parts of the reflection coefficient, over
// frequency. Nothing is extrapolated: ask `covers()` first. A circuit or a constant covers every
// frequency above zero.
#pragma once

#include <memory>
#include <span>
#include <string>
#include <vector>

#include "solver/rf/circuit.h"
#include "solver/rf/immittance.h"
#include "solver/rf/wave.h"

namespace bandwright {

class OnePort {
 public:
  // Frequencies in Hz, strictly increasing and positive; one reflection each, at `reference_ohm`.
  // At least one sample; one sample covers that frequency alone. Precondition, not checked here.
  static OnePort from_reflection(std::vector<double> frequency_hz, std::vector<Complex> reflection,
                                 double reference_ohm);
  static OnePort from_circuit(Circuit circuit);
  static OnePort constant(Complex impedance_ohm);

  // First and last frequency known, Hz: 0 and infinity for circuits and constants.
  double first_hz() const;
  double last_hz() const;
  bool covers(double frequency_hz) const;
  // The sample frequencies; empty for circuits and constants.
  std::span<const double> sample_hz() const;
  // True if the impedance is one constant; then `constant_ohm()` is that value.
  bool is_constant() const;
  Complex constant_ohm() const;

  // Precondition: covers(frequency_hz).
  Wave wave(double frequency_hz) const;
  Complex reflection(double frequency_hz, double reference_ohm) const {
    return wave(frequency_hz).reflection(reference_ohm);
  }
  Complex impedance_ohm(double frequency_hz) const { return wave(frequency_hz).impedance_ohm(); }

 private:
  struct Model;
  explicit OnePort(std::shared_ptr<const Model> model) : model_(std::move(model)) {}
  std::shared_ptr<const Model> model_;
};

}  // namespace bandwright
