// Impedance, admittance and hybrid matrices as scattering matrices.
//
// Each of them is a linear relation A v + B i = 0 between the port voltages and currents. With
// v = a + b and i = a - b (waves at a real reference, voltages and currents scaled by its root),
// (A - B) b = -(A + B) a, so one solution serves all (Kurokawa, IEEE Trans. MTT-13, 1965, for the
// waves).
#pragma once

#include <span>

#include "solver/rf/touchstone_options.h"

namespace bandwright {

// Turns `matrix` (row by row, one reference for each port, ohm, siemens and ratios) into scattering
// parameters at `reference_ohm`. H and G are of 2-ports. False if there is no finite result.
bool to_scattering(NetworkParameter parameter, std::span<const double> reference_ohm,
                   std::span<Complex> matrix);

}  // namespace bandwright
