#include "solver/base/random.h"

#include <doctest/doctest.h>

#include <cmath>
#include <vector>

namespace bandwright {
namespace {

TEST_CASE("the mixing function gives SplitMix64's published sequences") {
  // Steele, Lea and Flood, OOPSLA 2014: output k of seed s is mix64(s + k * golden). Values from
  // memory of the published test vectors, confirmed by computation.
  constexpr std::uint64_t kGolden = 0x9E3779B97F4A7C15ull;
  constexpr std::uint64_t kSeed0[] = {0xE220A8397B1DCDAFull, 0x6E789E6AA1B965F4ull,
                                      0x06C45D188009454Full, 0xF88BB8A8724C81ECull,
                                      0x1B39896A51A8749Bull};
  constexpr std::uint64_t kSeed1234567[] = {6457827717110365317ull, 3203168211198807973ull,
                                            9817491932198370423ull, 4593380528125082431ull,
                                            16408922859458223821ull};
  for (std::uint64_t k = 0; k < 5; ++k) {
    CHECK(mix64((k + 1) * kGolden) == kSeed0[k]);
    CHECK(mix64(1234567 + (k + 1) * kGolden) == kSeed1234567[k]);
  }
}

TEST_CASE("a draw depends on seed, stream and index alone") {
  const RandomStream stream(7, 3);
  const double tenth = stream.uniform(10);
  (void)stream.uniform(11);
  CHECK(RandomStream(7, 3).uniform(10) == tenth);
  CHECK(RandomStream(8, 3).uniform(10) != tenth);
  CHECK(RandomStream(7, 4).uniform(10) != tenth);
  CHECK(stream.fork(1).uniform(10) != stream.fork(2).uniform(10));
}

TEST_CASE("uniform draws have the mean and variance of their law") {
  const RandomStream stream(1, 1);
  constexpr int kDraws = 200'000;
  double sum = 0, squares = 0, normal_sum = 0, normal_squares = 0;
  for (int i = 0; i < kDraws; ++i) {
    const double u = stream.symmetric(i);
    CHECK_FALSE((u < -1 || u >= 1));
    sum += u;
    squares += u * u;
    const double z = stream.fork(9).normal(i);
    normal_sum += z;
    normal_squares += z * z;
  }
  CHECK(sum / kDraws == doctest::Approx(0).scale(1).epsilon(0.006));
  CHECK(squares / kDraws == doctest::Approx(1.0 / 3).epsilon(0.01));
  CHECK(normal_sum / kDraws == doctest::Approx(0).scale(1).epsilon(0.01));
  CHECK(normal_squares / kDraws == doctest::Approx(1).epsilon(0.015));
}

TEST_CASE("the normal quantile inverts the distribution function") {
  for (const double p : {1e-12, 1e-6, 0.01, 0.075, 0.25, 0.5, 0.6, 0.925, 0.975, 1 - 1e-9}) {
    CHECK(0.5 * std::erfc(-normal_quantile(p) / std::sqrt(2.0)) ==
          doctest::Approx(p).epsilon(1e-12));
  }
  // The two-sided 95 % point of the standard normal distribution.
  CHECK(normal_quantile(0.975) == doctest::Approx(1.959963984540054).epsilon(1e-14));
}

}  // namespace
}  // namespace bandwright
