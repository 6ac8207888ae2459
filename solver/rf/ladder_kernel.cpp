#include "solver/rf/ladder_kernel.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "solver/rf/ladder_kernel.cpp"
#include <hwy/foreach_target.h>
#include <hwy/highway.h>

#include "solver/rf/ladder_step-inl.h"

HWY_BEFORE_NAMESPACE();
namespace bandwright {
namespace HWY_NAMESPACE {
// |V + Zs I|^2 of vector `k` of a block.
template <bool kRealSource>
HWY_INLINE V delivered_reciprocal(const KernelTask& t, const State& s, int at, int k) {
  const V zr = load(t.source_re, at, k);
  V re = hn::MulAdd(zr, s.i_re[k], s.v_re[k]);
  V im = hn::MulAdd(zr, s.i_im[k], s.v_im[k]);
  if (!kRealSource) {
    const V zi = load(t.source_im, at, k);
    re = hn::NegMulAdd(zi, s.i_im[k], re);
    im = hn::MulAdd(zi, s.i_re[k], im);
  }
  return hn::MulAdd(re, re, hn::Mul(im, im));
}

// |V - conj(Zs) I|^2.
template <bool kRealSource>
HWY_INLINE V returned(const KernelTask& t, const State& s, int at, int k) {
  const V zr = load(t.source_re, at, k);
  V re = hn::NegMulAdd(zr, s.i_re[k], s.v_re[k]);
  V im = hn::NegMulAdd(zr, s.i_im[k], s.v_im[k]);
  if (!kRealSource) {
    const V zi = load(t.source_im, at, k);
    re = hn::NegMulAdd(zi, s.i_im[k], re);
    im = hn::MulAdd(zi, s.i_re[k], im);
  }
  return hn::MulAdd(re, re, hn::Mul(im, im));
}

template <Badness kBadness, bool kRealSource>
HWY_INLINE V badness_of(const KernelTask& t, const State& s, int at, int k) {
  const V one = hn::Set(D(), 1.0);
  const V delivered = delivered_reciprocal<kRealSource>(t, s, at, k);
  if (kBadness == Badness::lost) return delivered;
  if (kBadness == Badness::transferred) return hn::Div(one, delivered);
  if (kBadness == Badness::reflected_from_gain) return hn::Sub(one, hn::Div(one, delivered));
  const V back = returned<kRealSource>(t, s, at, k);
  return kBadness == Badness::reflected ? hn::Div(back, delivered) : hn::Div(delivered, back);
}

HWY_INLINE State state_at_source(const KernelTask& t, const double* x, int at) {
  State s;
  for (int k = 0; k < kVectors; ++k) {
    s.v_re[k] = load(t.voltage_re, at, k);
    s.v_im[k] = load(t.voltage_im, at, k);
    s.i_re[k] = load(t.current_re, at, k);
    s.i_im[k] = load(t.current_im, at, k);
  }
  for (int i = 0; i < t.step_count; ++i) apply(t.steps[i], hn::Set(D(), x[i]), at, s);
  return s;
}

template <Badness kBadness, bool kRealSource>
HWY_INLINE double segment_worst(const KernelTask& t, const KernelSegment& segment, const double* x,
                                double* badness) {
  V most = hn::Set(D(), -1e300);
  for (int at = segment.first; at < segment.first + segment.padded; at += kLanes) {
    const State s = state_at_source(t, x, at);
    for (int k = 0; k < kVectors; ++k) {
      const V value = badness_of<kBadness, kRealSource>(t, s, at, k);
      if (badness != nullptr) hn::StoreU(value, D(), badness + at + k * kVectorLanes);
      most = hn::Max(most, value);
    }
  }
  return hn::GetLane(hn::MaxOfLanes(D(), most));
}

template <bool kRealSource>
HWY_INLINE double worst_of(const KernelTask& t, const KernelSegment& segment, Badness badness_kind,
                           const double* x, double* badness) {
  switch (badness_kind) {
    case Badness::reflected_from_gain:
      return segment_worst<Badness::reflected_from_gain, kRealSource>(t, segment, x, badness);
    case Badness::reflected:
      return segment_worst<Badness::reflected, kRealSource>(t, segment, x, badness);
    case Badness::not_reflected:
      return segment_worst<Badness::not_reflected, kRealSource>(t, segment, x, badness);
    case Badness::lost:
      return segment_worst<Badness::lost, kRealSource>(t, segment, x, badness);
    case Badness::transferred:
      break;
  }
  return segment_worst<Badness::transferred, kRealSource>(t, segment, x, badness);
}

// The common case with nothing left to decide in the loop: lossless elements, series and shunt in
// turn, a real source. Reads D, and with kStore keeps every point's 1 - 1/D.
template <int kSteps, bool kSeriesFirst, bool kStore>
HWY_NOINLINE double alternating_worst(const KernelTask& t, const KernelSegment& segment,
                                      const double* x, double* badness) {
  const D d;
  const V one = hn::Set(d, 1.0);
  V most[kVectors];
  for (int k = 0; k < kVectors; ++k) most[k] = hn::Set(d, -1e300);
  for (int at = segment.first; at < segment.first + segment.padded; at += kLanes) {
    for (int k = 0; k < kVectors; ++k) {
      V v_re = load(t.voltage_re, at, k), v_im = load(t.voltage_im, at, k);
      V i_re = load(t.current_re, at, k), i_im = load(t.current_im, at, k);
      for (int n = 0; n < kSteps; ++n) {
        const V b = hn::Mul(hn::Set(d, x[n]), load(t.steps[n].b, at, k));
        if ((n % 2 == 0) == kSeriesFirst) {
          v_re = hn::NegMulAdd(b, i_im, v_re);
          v_im = hn::MulAdd(b, i_re, v_im);
        } else {
          i_re = hn::NegMulAdd(b, v_im, i_re);
          i_im = hn::MulAdd(b, v_re, i_im);
        }
      }
      const V zr = load(t.source_re, at, k);
      const V re = hn::MulAdd(zr, i_re, v_re), im = hn::MulAdd(zr, i_im, v_im);
      V value = hn::MulAdd(re, re, hn::Mul(im, im));
      if (kStore) {
        value = hn::Sub(one, hn::Div(one, value));
        hn::StoreU(value, d, badness + at + k * kVectorLanes);
      }
      most[k] = hn::Max(most[k], value);
    }
  }
  V all = most[0];
  for (int k = 1; k < kVectors; ++k) all = hn::Max(all, most[k]);
  return hn::GetLane(hn::MaxOfLanes(d, all));
}

template <int kSteps, bool kStore>
HWY_INLINE double alternating_of(const KernelTask& t, const KernelSegment& segment, const double* x,
                                 double* badness) {
  if (t.step_count < kSteps) {
    return alternating_of<(kSteps > 1 ? kSteps - 1 : 1), kStore>(t, segment, x, badness);
  }
  return t.steps[0].op == KernelStep::Op::series_reactance
             ? alternating_worst<kSteps, true, kStore>(t, segment, x, badness)
             : alternating_worst<kSteps, false, kStore>(t, segment, x, badness);
}

HWY_INLINE double alternating_badness(const KernelTask& t, const KernelSegment& segment,
                                      const double* x, double* badness) {
  if (badness != nullptr) return alternating_of<kMostAlternating, true>(t, segment, x, badness);
  return 1.0 - 1.0 / alternating_of<kMostAlternating, false>(t, segment, x, nullptr);
}

HWY_INLINE void run(const KernelTask& t, const double* x, double* badness, double* worst) {
  for (int g = 0; g < t.segment_count; ++g) {
    const KernelSegment& segment = t.segments[g];
    if (t.alternating && segment.badness == Badness::reflected_from_gain) {
      worst[g] = alternating_badness(t, segment, x, badness);
      continue;
    }
    // When no point's figure is kept, D stands in for 1 - 1/D, which rises with it.
    const bool from_gain = badness == nullptr && segment.badness == Badness::reflected_from_gain;
    const Badness kind = from_gain ? Badness::lost : segment.badness;
    const double most = t.real_source ? worst_of<true>(t, segment, kind, x, badness)
                                      : worst_of<false>(t, segment, kind, x, badness);
    worst[g] = from_gain ? 1.0 - 1.0 / most : most;
  }
}

void worst_impl(const KernelTask& task, const double* x, double* worst) {
  run(task, x, nullptr, worst);
}

void points_impl(const KernelTask& task, const double* x, double* badness, double* worst) {
  run(task, x, badness, worst);
}

double power_sum_impl(const double* badness, const double* mask, int padded, double scale,
                      int power) {
  const D d;
  const V factor = hn::Set(d, scale), zero = hn::Zero(d);
  V sum[kVectors];
  for (int k = 0; k < kVectors; ++k) sum[k] = zero;
  for (int at = 0; at < padded; at += kLanes) {
    V ratio[kVectors];
    for (int k = 0; k < kVectors; ++k) {
      ratio[k] = hn::Mul(factor, hn::Max(load(badness, at, k), zero));
    }
    for (int p = 2; p < power; p *= 2) {
      for (int k = 0; k < kVectors; ++k) ratio[k] = hn::Mul(ratio[k], ratio[k]);
    }
    for (int k = 0; k < kVectors; ++k) sum[k] = hn::MulAdd(load(mask, at, k), ratio[k], sum[k]);
  }
  V total = sum[0];
  for (int k = 1; k < kVectors; ++k) total = hn::Add(total, sum[k]);
  return hn::GetLane(hn::SumOfLanes(d, total));
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
HWY_EXPORT(power_sum_impl);
HWY_EXPORT(name_impl);

bool is_alternating(const KernelStep* steps, int count) {
  using Op = KernelStep::Op;
  if (count < 1 || count > kMostAlternating) return false;
  for (int k = 0; k < count; ++k) {
    if (steps[k].op != Op::series_reactance && steps[k].op != Op::shunt_susceptance) return false;
    if (k > 0 && steps[k].op == steps[k - 1].op) return false;
  }
  return true;
}

void kernel_worst(const KernelTask& task, const double* x, double* worst) {
  HWY_DYNAMIC_DISPATCH(worst_impl)(task, x, worst);
}

void kernel_points(const KernelTask& task, const double* x, double* badness, double* worst) {
  HWY_DYNAMIC_DISPATCH(points_impl)(task, x, badness, worst);
}

double kernel_power_sum(const double* badness, const double* mask, int padded, double scale,
                        int power) {
  return HWY_DYNAMIC_DISPATCH(power_sum_impl)(badness, mask, padded, scale, power);
}

const char* kernel_instruction_set() {
  return HWY_DYNAMIC_DISPATCH(name_impl)();
}

}  // namespace bandwright
#endif
