// Orthonormal rational functions with poles where the best match is rough.
//
// The extremal functions of a broadband match are smooth save at the band edges, where they turn
// with the logarithm of the distance. Polynomials (on the circle to which the imaginary axis is
// often mapped) need thousands of terms to follow that. Rational functions whose poles approach
// each edge in a geometric sequence need some dozens (Newman, Michigan Math. J. 11, 1964, found the
// principle). The functions here are real at conjugate frequencies, as real networks are, and
// orthonormal on the imaginary axis (Kautz, IRE Trans. Circuit Theory 1, 1954).
#pragma once

#include <span>
#include <vector>

#include "solver/limit/band_grid.h"

namespace bandwright {

// Poles at -distance + j centre and -distance - j centre; one real pole where the centre is 0.
struct PolePair {
  double distance = 0;
  double centre = 0;

  std::size_t functions() const { return centre > 0 ? 2 : 1; }
};

// Poles in the unit of the bands' edges (rad/s over 2 pi, if those are Hz), in order of `level`
// from 0: those of each level stand behind all of the level before, so sections hold one another.
std::vector<std::vector<PolePair>> pole_levels(const std::vector<SpacedBand>& bands, int levels);

// Values at s = j `frequency` of all functions that `poles` give, in order. The integral of
// v_i conj(v_j) over all real frequencies, negative ones too, is 2 pi for i = j and else 0.
// `values` must have room for them.
void evaluate_basis(std::span<const PolePair> poles, double frequency, std::span<Complex> values);

}  // namespace bandwright
