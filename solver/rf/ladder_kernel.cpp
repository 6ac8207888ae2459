#include "solver/rf/ladder_kernel.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "solver/rf/ladder_kernel.cpp"
#include <hwy/foreach_target.h>
#include <hwy/highway.h>

#include "solver/rf/ladder_step-inl.h"

HWY_BEFORE_NAMESPACE();
namespace bandwright {
namespace HWY_NAMESPACE {
HWY_INLINE V delivered_reciprocal(const KernelTask& t, const State& s, int at) {
  const D d;
  const V zr = hn::LoadU(d, t.source_re + at);
  const V zi = hn::LoadU(d, t.source_im + at);
  const V re = hn::NegMulAdd(zi, s.i_im, hn::MulAdd(zr, s.i_re, s.v_re));
  const V im = hn::MulAdd(zi, s.i_re, hn::MulAdd(zr, s.i_im, s.v_im));
  return hn::MulAdd(re, re, hn::Mul(im, im));
}

HWY_INLINE V returned(const KernelTask& t, const State& s, int at) {
  const D d;
  const V zr = hn::LoadU(d, t.source_re + at);
  const V zi = hn::LoadU(d, t.source_im + at);
  const V re = hn::NegMulAdd(zi, s.i_im, hn::NegMulAdd(zr, s.i_re, s.v_re));
  const V im = hn::MulAdd(zi, s.i_re, hn::NegMulAdd(zr, s.i_im, s.v_im));
  return hn::MulAdd(re, re, hn::Mul(im, im));
}

HWY_INLINE V badness_of(const KernelTask& t, Badness badness, const State& s, int at) {
  const D d;
  const V one = hn::Set(d, 1.0);
  switch (badness) {
    case Badness::reflected_from_gain:
      return hn::Sub(one, hn::Div(one, delivered_reciprocal(t, s, at)));
    case Badness::reflected:
      return hn::Div(returned(t, s, at), delivered_reciprocal(t, s, at));
    case Badness::not_reflected:
      return hn::Div(delivered_reciprocal(t, s, at), returned(t, s, at));
    case Badness::lost:
      return delivered_reciprocal(t, s, at);
    case Badness::transferred:
      break;
  }
  return hn::Div(one, delivered_reciprocal(t, s, at));
}

HWY_INLINE State state_at_source(const KernelTask& t, const double* x, int at) {
  const D d;
  State s{hn::LoadU(d, t.voltage_re + at), hn::LoadU(d, t.voltage_im + at),
          hn::LoadU(d, t.current_re + at), hn::LoadU(d, t.current_im + at)};
  for (int k = 0; k < t.step_count; ++k) apply(t.steps[k], hn::Set(d, x[k]), at, s);
  return s;
}

template <bool kStore>
HWY_INLINE void run(const KernelTask& t, const double* x, double* badness, double* worst) {
  const D d;
  const int lanes = static_cast<int>(hn::Lanes(d));
  for (int g = 0; g < t.segment_count; ++g) {
    const KernelSegment& segment = t.segments[g];
    V most = hn::Set(d, -1e300);
    // Without stores the cheaper monotone figure D stands in for 1 - 1/D until the end.
    const bool from_gain = !kStore && segment.badness == Badness::reflected_from_gain;
    const Badness figure = from_gain ? Badness::lost : segment.badness;
    for (int k = 0; k < segment.padded; k += lanes) {
      const int at = segment.first + k;
      const V value = badness_of(t, figure, state_at_source(t, x, at), at);
      if (kStore) hn::StoreU(value, d, badness + at);
      most = hn::Max(most, value);
    }
    const double largest = hn::GetLane(hn::MaxOfLanes(d, most));
    worst[g] = from_gain ? 1.0 - 1.0 / largest : largest;
  }
}

void worst_impl(const KernelTask& task, const double* x, double* worst) {
  run<false>(task, x, nullptr, worst);
}

void points_impl(const KernelTask& task, const double* x, double* badness, double* worst) {
  run<true>(task, x, badness, worst);
}

const char* name_impl() {
  return hwy::TargetName(HWY_TARGET);
}

}  // namespace HWY_NAMESPACE
}  // namespace bandwright
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace bandwright {

HWY_EXPORT(worst_impl);
HWY_EXPORT(points_impl);
HWY_EXPORT(name_impl);

void kernel_worst(const KernelTask& task, const double* x, double* worst) {
  HWY_DYNAMIC_DISPATCH(worst_impl)(task, x, worst);
}

void kernel_points(const KernelTask& task, const double* x, double* badness, double* worst) {
  HWY_DYNAMIC_DISPATCH(points_impl)(task, x, badness, worst);
}

const char* kernel_instruction_set() {
  return HWY_DYNAMIC_DISPATCH(name_impl)();
}

}  // namespace bandwright
#endif
