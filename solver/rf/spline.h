// A cubic spline through complex samples, with "not-a-knot" ends.
//
// Two continuous derivatives everywhere, and a continuous third one at the second and the last but
// one knot: cubic polynomials are reproduced exactly, and no end slope has to be invented. The
// slopes at the knots solve a tridiagonal system (de Boor, A Practical Guide to Splines, 1978,
// chapter IV). Two samples give a line, three a parabola, one a constant.
#pragma once

#include <span>
#include <vector>

#include "solver/rf/immittance.h"

namespace bandwright {

class Spline {
 public:
  // `knots` strictly increasing, one value each, at least one. Precondition, not checked here.
  Spline(std::vector<double> knots, std::vector<Complex> values);

  // Precondition: x lies between the first and the last knot. O(log n).
  Complex operator()(double x) const;

  std::span<const double> knots() const { return knots_; }

 private:
  std::vector<double> knots_;
  std::vector<Complex> values_;
  std::vector<Complex> slopes_;  // per whole span of the knots, so that no unit can overflow
  double span_ = 1;
};

}  // namespace bandwright
