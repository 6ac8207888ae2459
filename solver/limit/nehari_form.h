// The quadratic form whose sign tells whether a mismatch r can be reached.
//
// With k and R the centre and radius of the disc at each frequency (R = 1, k = 0 off the bands) and
// P the projection on functions analytic in the left half plane, a reflection inside all discs
// exists only if, for every v analytic in the right half plane,
//
//     integral of R^2 |v|^2  >=  || P (k v) ||^2 .
//
// (Write f for the reflection: P(k v) = P((k - f) v), and |k - f| <= R. That this is also enough is
// Nehari's theorem, on Helton's discs.) In a section v is a sum of the functions of
// rational_basis.h and P goes over to their conjugates, which can only make the right side smaller.
// So one v that breaks the inequality proves r out of reach. In matrices: v'(I - W - B B)v < 0,
// where W integrates (1 - R^2) v_i conj(v_j) and B integrates k v_i v_j, over the bands alone.
#pragma once

#include <memory>
#include <vector>

#include "solver/limit/rational_basis.h"

namespace bandwright {

// The load at one node of the bands.
struct LoadNode {
  double frequency = 0;  // in the unit of the poles
  double weight = 0;     // of the integral over that unit
  Complex reflection;    // at any real reference
  double absorbed = 0;   // 1 - |reflection|^2, above 0
};

// Thread safety: const members may be called from any thread.
class NehariForm {
 public:
  NehariForm(std::vector<LoadNode> nodes, const std::vector<PolePair>& poles);

  // The lowest return loss that the first `section` functions are found to prove out of reach;
  // `from_db`, above 0, if they do not prove that one to be.
  double lowest_unreachable_db(int section, double from_db) const;

 private:
  struct Tables;
  std::shared_ptr<const Tables> tables_;
};

}  // namespace bandwright
