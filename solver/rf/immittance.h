// Reflection, impedance, admittance and the decibel figures made from them.
//
// Conventions: impedance in ohm, admittance in siemens, reference resistance in ohm, real and
// positive. A return loss is a positive number of decibels, -20 log10 |reflection|.
#pragma once

#include <complex>

namespace bandwright {

using Complex = std::complex<double>;

// (Z - R) / (Z + R).
Complex reflection_from_impedance(Complex impedance_ohm, double reference_ohm);
// (1 - R Y) / (1 + R Y).
Complex reflection_from_admittance(Complex admittance_s, double reference_ohm);
// R (1 + S) / (1 - S); infinite for S = 1.
Complex impedance_from_reflection(Complex reflection, double reference_ohm);
// (1 - S) / (R (1 + S)); infinite for S = -1.
Complex admittance_from_reflection(Complex reflection, double reference_ohm);
// The reflection of power waves between a port and a source with complex impedance,
// (Z - conj(Zs)) / (Z + Zs) (Kurokawa, IEEE Trans. MTT-13, 1965, eq. 13).
Complex power_wave_reflection(Complex impedance_ohm, Complex source_ohm);

// A return loss no larger than this is reported for a perfect match, so that no answer holds an
// infinity.
inline constexpr double kPerfectReturnLossDb = 200.0;

double return_loss_db(double reflection_magnitude);
double reflection_from_return_loss_db(double loss_db);
double vswr(double reflection_magnitude);
// -10 log10(1 - |reflection|^2): power that does not enter, in dB.
double mismatch_loss_db(double reflection_magnitude);

}  // namespace bandwright
