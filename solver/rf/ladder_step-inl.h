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

struct State {
  V v_re, v_im, i_re, i_im;
};

// (to) += (a + jb) (from).
HWY_INLINE void add_product(V a, V b, V from_re, V from_im, V& to_re, V& to_im) {
  to_re = hn::NegMulAdd(b, from_im, hn::MulAdd(a, from_re, to_re));
  to_im = hn::MulAdd(b, from_re, hn::MulAdd(a, from_im, to_im));
}

HWY_INLINE void apply(const KernelStep& step, V x, int at, State& s) {
  const D d;
  using Op = KernelStep::Op;
  const V b = hn::Mul(x, hn::LoadU(d, step.b + at));
  switch (step.op) {
    case Op::series_reactance:
      s.v_re = hn::NegMulAdd(b, s.i_im, s.v_re);
      s.v_im = hn::MulAdd(b, s.i_re, s.v_im);
      return;
    case Op::shunt_susceptance:
      s.i_re = hn::NegMulAdd(b, s.v_im, s.i_re);
      s.i_im = hn::MulAdd(b, s.v_re, s.i_im);
      return;
    case Op::series_linear:
      add_product(hn::Mul(x, hn::LoadU(d, step.a + at)), b, s.i_re, s.i_im, s.v_re, s.v_im);
      return;
    case Op::shunt_linear:
      add_product(hn::Mul(x, hn::LoadU(d, step.a + at)), b, s.v_re, s.v_im, s.i_re, s.i_im);
      return;
    case Op::series_affine: {
      const V re = hn::MulAdd(x, hn::LoadU(d, step.a + at), hn::LoadU(d, step.c + at));
      const V im = hn::Add(b, hn::LoadU(d, step.d + at));
      add_product(re, im, s.i_re, s.i_im, s.v_re, s.v_im);
      return;
    }
    case Op::shunt_affine: {
      const V re = hn::MulAdd(x, hn::LoadU(d, step.a + at), hn::LoadU(d, step.c + at));
      const V im = hn::Add(b, hn::LoadU(d, step.d + at));
      const V scale = hn::Div(hn::Set(d, 1.0), hn::MulAdd(re, re, hn::Mul(im, im)));
      add_product(hn::Mul(re, scale), hn::Neg(hn::Mul(im, scale)), s.v_re, s.v_im, s.i_re, s.i_im);
      return;
    }
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace bandwright
HWY_AFTER_NAMESPACE();

#endif
