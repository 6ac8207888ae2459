// The arithmetic that the ladder kernel does for one point, counted in its source: a multiply-add
// is two operations; a multiplication, addition or division is one; loads, sign changes, maxima and
// the padding of a band count nothing.
//
//   series reactance, shunt susceptance   x b, then 2 multiply-adds                    5
//   series or shunt, linear               x a, x b, then 4 multiply-adds              10
//   series, affine                        x a + c, x b + d, then 4 multiply-adds      12
//   shunt, affine                         the same and one reciprocal of a complex    18
//   lossless at a real source             |V + Zs I|^2                                 7
//   lossy at a real source                |V - Zs I|^2 / |V + Zs I|^2                 15
#pragma once

#include "solver/rf/ladder.h"

namespace bandwright::benchmark_cases {

inline int step_operations(KernelStep::Op op) {
  switch (op) {
    case KernelStep::Op::series_reactance:
    case KernelStep::Op::shunt_susceptance:
      return 5;
    case KernelStep::Op::series_linear:
    case KernelStep::Op::shunt_linear:
      return 10;
    case KernelStep::Op::series_affine:
      return 12;
    case KernelStep::Op::shunt_affine:
      break;
  }
  return 18;
}

// For one margin of a network under a return-loss goal, with a real source.
inline int operations_per_point(const Ladder& ladder, bool lossless) {
  int count = lossless ? 7 : 15;
  for (int i = 0; i < ladder.slots(); ++i) count += step_operations(ladder.step(i).op);
  return count;
}

}  // namespace bandwright::benchmark_cases
