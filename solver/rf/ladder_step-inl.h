// What every vectorised ladder loop shares: the state at a port and one element's step.
//
// Included once for each instruction set, as the vector library wants it, hence the odd guard.
#if defined(BANDWRIGHT_LADDER_STEP_INL) == defined(HWY_TARGET_TOGGLE)
#ifdef BANDWRIGHT_LADDER_STEP_INL
#undef BANDWRIGHT_LADDER_STEP_INL
#else
#define BANDWRIGHT_LADDER_STEP_INL
#endif

#include <hwy/highway.h>

#include "solver/rf/ladder_kernel.h"

HWY_BEFORE_NAMESPACE();
namespace bandwright {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

// At most kLanes wide, so that every segment is a whole number of vectors on every target.
using D = hn::CappedTag<double, kLanes>;
using V = hn::Vec<D>;
// A block is kLanes points, as many vectors as that takes: the element loop around it then costs
// little, and the chains of several vectors fill the arithmetic units together.
constexpr int kVectorLanes = static_cast<int>(hn::MaxLanes(D()));
constexpr int kVectors = kLanes / kVectorLanes;

struct State {
  V v_re[kVectors], v_im[kVectors], i_re[kVectors], i_im[kVectors];
};

HWY_INLINE V load(const double* table, int at, int k) {
  return hn::LoadU(D(), table + at + k * kVectorLanes);
}

// to += (a + jb) from.
HWY_INLINE void add_product(V a, V b, V from_re, V from_im, V& to_re, V& to_im) {
  to_re = hn::NegMulAdd(b, from_im, hn::MulAdd(a, from_re, to_re));
  to_im = hn::MulAdd(b, from_re, hn::MulAdd(a, from_im, to_im));
}

HWY_INLINE void apply(const KernelStep& step, V x, int at, State& s) {
  using Op = KernelStep::Op;
  switch (step.op) {
    case Op::series_reactance:
      for (int k = 0; k < kVectors; ++k) {
        const V b = hn::Mul(x, load(step.b, at, k));
        s.v_re[k] = hn::NegMulAdd(b, s.i_im[k], s.v_re[k]);
        s.v_im[k] = hn::MulAdd(b, s.i_re[k], s.v_im[k]);
      }
      return;
    case Op::shunt_susceptance:
      for (int k = 0; k < kVectors; ++k) {
        const V b = hn::Mul(x, load(step.b, at, k));
        s.i_re[k] = hn::NegMulAdd(b, s.v_im[k], s.i_re[k]);
        s.i_im[k] = hn::MulAdd(b, s.v_re[k], s.i_im[k]);
      }
      return;
    case Op::series_linear:
      for (int k = 0; k < kVectors; ++k) {
        add_product(hn::Mul(x, load(step.a, at, k)), hn::Mul(x, load(step.b, at, k)), s.i_re[k],
                    s.i_im[k], s.v_re[k], s.v_im[k]);
      }
      return;
    case Op::shunt_linear:
      for (int k = 0; k < kVectors; ++k) {
        add_product(hn::Mul(x, load(step.a, at, k)), hn::Mul(x, load(step.b, at, k)), s.v_re[k],
                    s.v_im[k], s.i_re[k], s.i_im[k]);
      }
      return;
    case Op::series_affine:
      for (int k = 0; k < kVectors; ++k) {
        const V re = hn::MulAdd(x, load(step.a, at, k), load(step.c, at, k));
        const V im = hn::MulAdd(x, load(step.b, at, k), load(step.d, at, k));
        add_product(re, im, s.i_re[k], s.i_im[k], s.v_re[k], s.v_im[k]);
      }
      return;
    case Op::shunt_affine:
      for (int k = 0; k < kVectors; ++k) {
        const V re = hn::MulAdd(x, load(step.a, at, k), load(step.c, at, k));
        const V im = hn::MulAdd(x, load(step.b, at, k), load(step.d, at, k));
        const V one = hn::Set(D(), 1.0);
        const V scale = hn::Div(one, hn::MulAdd(re, re, hn::Mul(im, im)));
        const V minus_b = hn::Mul(im, scale);
        add_product(hn::Mul(re, scale), hn::Neg(minus_b), s.v_re[k], s.v_im[k], s.i_re[k],
                    s.i_im[k]);
      }
      return;
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace bandwright
HWY_AFTER_NAMESPACE();

#endif
