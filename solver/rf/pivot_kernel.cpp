#include "solver/rf/pivot_kernel.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "solver/rf/pivot_kernel.cpp"
#include <hwy/foreach_target.h>
#include <hwy/highway.h>

#include "solver/rf/ladder_step-inl.h"

HWY_BEFORE_NAMESPACE();
namespace bandwright {
namespace HWY_NAMESPACE {

constexpr double kFar = 1e300;
constexpr double kSlack = 4e-9;

struct C {
  V re, im;
};
HWY_INLINE C mul(C a, C b) {
  return {hn::NegMulAdd(a.im, b.im, hn::Mul(a.re, b.re)),
          hn::MulAdd(a.im, b.re, hn::Mul(a.re, b.im))};
}
HWY_INLINE C add(C a, C b) {
  return {hn::Add(a.re, b.re), hn::Add(a.im, b.im)};
}
HWY_INLINE C sub(C a, C b) {
  return {hn::Sub(a.re, b.re), hn::Sub(a.im, b.im)};
}
HWY_INLINE C neg(C a) {
  return {hn::Neg(a.re), hn::Neg(a.im)};
}
HWY_INLINE V norm(C a) {
  return hn::MulAdd(a.re, a.re, hn::Mul(a.im, a.im));
}
// Re(conj(a) b).
HWY_INLINE V inner(C a, C b) {
  return hn::MulAdd(a.re, b.re, hn::Mul(a.im, b.im));
}

HWY_INLINE State load_state(const StateArrays& from, int at) {
  State s;
  for (int k = 0; k < kVectors; ++k) {
    s.v_re[k] = load(from.voltage_re, at, k);
    s.v_im[k] = load(from.voltage_im, at, k);
    s.i_re[k] = load(from.current_re, at, k);
    s.i_im[k] = load(from.current_im, at, k);
  }
  return s;
}

// N = |n0 + n1 x|^2, D = |d0 + d1 x|^2, S = |s0 + s1 x|^2.
struct Linear {
  C n0, n1, d0, d1, s0, s1;
};

HWY_INLINE Linear linear_in_pivot(const PivotTask& t, const State& s, int at, int k) {
  const D d;
  using Op = KernelStep::Op;
  const V zero = hn::Zero(d);
  const C v{s.v_re[k], s.v_im[k]}, i{s.i_re[k], s.i_im[k]};
  const C zs{load(t.source_re, at, k), load(t.source_im, at, k)};
  const C zs_conj{zs.re, hn::Neg(zs.im)};
  const Op op = t.pivot.op;
  const bool lossless = op == Op::series_reactance || op == Op::shunt_susceptance;
  const C w{lossless ? zero : load(t.pivot.a, at, k), load(t.pivot.b, at, k)};
  Linear out;
  out.s0 = {hn::Set(d, 1.0), zero};
  out.s1 = {zero, zero};
  const C n = sub(v, mul(zs_conj, i)), e = add(v, mul(zs, i));
  if (op == Op::shunt_affine) {
    // Everything times the pivot's impedance z + w x.
    const C z{load(t.pivot.c, at, k), load(t.pivot.d, at, k)};
    return {
        sub(mul(n, z), mul(zs_conj, v)), mul(n, w), add(mul(e, z), mul(zs, v)), mul(e, w), z, w};
  }
  if (op == Op::shunt_susceptance || op == Op::shunt_linear) {
    const C wv = mul(w, v);
    out.n0 = n;
    out.n1 = neg(mul(zs_conj, wv));
    out.d0 = e;
    out.d1 = mul(zs, wv);
    return out;
  }
  C drop{zero, zero};
  if (op == Op::series_affine) {
    drop = mul({load(t.pivot.c, at, k), load(t.pivot.d, at, k)}, i);
  }
  out.n0 = add(n, drop);
  out.d0 = add(e, drop);
  out.n1 = out.d1 = mul(w, i);
  return out;
}

// The factors that meet the points of vector `k` of a block.
HWY_INLINE void narrow(const PivotTask& t, const State& s, int at, int k, FactorInterval& out) {
  const D d;
  const V zero = hn::Zero(d), far = hn::Set(d, kFar);
  const Linear f = linear_in_pivot(t, s, at, k);
  const V wn = load(t.weight_n, at, k), wd = load(t.weight_d, at, k), w0 = load(t.weight_0, at, k);
  const V q2 = hn::MulAdd(wn, norm(f.n1), hn::MulAdd(wd, norm(f.d1), hn::Mul(w0, norm(f.s1))));
  const V q1 = hn::MulAdd(wn, inner(f.n0, f.n1),
                          hn::MulAdd(wd, inner(f.d0, f.d1), hn::Mul(w0, inner(f.s0, f.s1))));
  const V q0 = hn::MulAdd(wn, norm(f.n0), hn::MulAdd(wd, norm(f.d0), hn::Mul(w0, norm(f.s0))));
  // q2 x^2 + 2 q1 x + q0 <= 0. A hair is added to the discriminant for touching parabolas.
  const V square = hn::Mul(q1, q1);
  const V disc = hn::MulAdd(hn::Set(d, 1e-12), square, hn::NegMulAdd(q2, q0, square));
  const V root = hn::Sqrt(hn::Max(disc, zero));
  const V inverse = hn::Div(hn::Set(d, 1.0), q2);
  const auto convex = hn::Gt(q2, zero);
  const auto none = hn::And(convex, hn::Lt(disc, zero));
  V low = hn::IfThenElse(convex, hn::Mul(hn::Neg(hn::Add(q1, root)), inverse), zero);
  V high = hn::IfThenElse(convex, hn::Mul(hn::Sub(root, q1), inverse), far);
  high = hn::IfThenElse(none, hn::Set(d, -kFar), high);
  const double least = hn::GetLane(hn::MaxOfLanes(d, low)) * (1 - kSlack);
  const double most = hn::GetLane(hn::MinOfLanes(d, high)) * (1 + kSlack);
  out.low = least > out.low ? least : out.low;
  out.high = most < out.high ? most : out.high;
}

FactorInterval interval_impl(const PivotTask& t, const KernelStep* step, double x,
                             const StateArrays& state) {
  FactorInterval out{0, kFar};
  for (int at = 0; at < t.points; at += kLanes) {
    State s = load_state(state, at);
    if (step != nullptr) apply(*step, hn::Set(D(), x), at, s);
    for (int k = 0; k < kVectors; ++k) {
      narrow(t, s, at, k, out);
      if (out.empty()) return out;
    }
  }
  return out;
}

void advance_impl(const KernelStep& step, double x, const StateArrays& from, const StateArrays& to,
                  int points) {
  const D d;
  for (int at = 0; at < points; at += kLanes) {
    State s = load_state(from, at);
    apply(step, hn::Set(d, x), at, s);
    for (int k = 0; k < kVectors; ++k) {
      const int to_at = at + k * kVectorLanes;
      hn::StoreU(s.v_re[k], d, to.voltage_re + to_at);
      hn::StoreU(s.v_im[k], d, to.voltage_im + to_at);
      hn::StoreU(s.i_re[k], d, to.current_re + to_at);
      hn::StoreU(s.i_im[k], d, to.current_im + to_at);
    }
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace bandwright
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace bandwright {

HWY_EXPORT(interval_impl);
HWY_EXPORT(advance_impl);

void advance_state(const KernelStep& step, double x, const StateArrays& from, const StateArrays& to,
                   int points) {
  HWY_DYNAMIC_DISPATCH(advance_impl)(step, x, from, to, points);
}

FactorInterval pivot_interval(const PivotTask& task, const KernelStep* step, double x,
                              const StateArrays& state) {
  return HWY_DYNAMIC_DISPATCH(interval_impl)(task, step, x, state);
}

}  // namespace bandwright
#endif
