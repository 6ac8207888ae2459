#include "tests/benchmark/fma_peak.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "tests/benchmark/fma_peak.cpp"
#include <hwy/foreach_target.h>
#include <hwy/highway.h>

HWY_BEFORE_NAMESPACE();
namespace bandwright::benchmark_cases {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

std::uint64_t multiply_add_impl(std::uint64_t rounds) {
  const hn::CappedTag<double, 8> d;
  // Ten chains hide the latency of one multiply-add (4 or 5 cycles, two a cycle). Written out: an
  // array of them would go through memory.
  auto a = hn::Set(d, 1.0), b = a, c = a, e = a, f = a, g = a, h = a, i = a, j = a, k = a;
  const auto factor = hn::Set(d, 0.999), term = hn::Set(d, 1e-3);
  for (std::uint64_t round = 0; round < rounds; ++round) {
    a = hn::MulAdd(a, factor, term);
    b = hn::MulAdd(b, factor, term);
    c = hn::MulAdd(c, factor, term);
    e = hn::MulAdd(e, factor, term);
    f = hn::MulAdd(f, factor, term);
    g = hn::MulAdd(g, factor, term);
    h = hn::MulAdd(h, factor, term);
    i = hn::MulAdd(i, factor, term);
    j = hn::MulAdd(j, factor, term);
    k = hn::MulAdd(k, factor, term);
#if HWY_COMPILER_GCC || HWY_COMPILER_CLANG
    // Equal chains must not be computed once for all.
    __asm__ volatile(""
                     : "+x"(a), "+x"(b), "+x"(c), "+x"(e), "+x"(f), "+x"(g), "+x"(h), "+x"(i),
                       "+x"(j), "+x"(k));
#endif
  }
  const auto sum = hn::Add(hn::Add(hn::Add(a, b), hn::Add(c, e)),
                           hn::Add(hn::Add(hn::Add(f, g), hn::Add(h, i)), hn::Add(j, k)));
  // A sum of shrinking terms is never this large: asked only so that the chains are needed.
  if (hn::GetLane(hn::SumOfLanes(d, sum)) > 1e300) return 0;
  return rounds * 10 * 2 * hn::Lanes(d);
}

}  // namespace HWY_NAMESPACE
}  // namespace bandwright::benchmark_cases
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace bandwright::benchmark_cases {

HWY_EXPORT(multiply_add_impl);

std::uint64_t multiply_add(std::uint64_t rounds) {
  return HWY_DYNAMIC_DISPATCH(multiply_add_impl)(rounds);
}

}  // namespace bandwright::benchmark_cases
#endif
