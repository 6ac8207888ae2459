// Confidence intervals of a share, against published figures.

#include <doctest/doctest.h>

#include <cmath>
#include <initializer_list>

#include "solver/tolerance/wilson.h"

namespace bandwright {
namespace {

TEST_CASE("Wilson's interval has the published values") {
  // 81/263 to 1/29: Newcombe, Stat. Med. 17 (1998) 857-872, table I, which prints 0.2553-0.3662,
  // 0.0624-0.1605, 0-0.1611 and 0.0061-0.1718 (from memory); all values computed from the formula
  // of the NIST/SEMATECH handbook, 7.2.4.1.
  struct Row {
    int successes, trials;
    double low, high;
  };
  const Row kRows[] = {{81, 263, 0.255289, 0.366210},
                       {15, 148, 0.062386, 0.160487},
                       {0, 20, 0, 0.161125},
                       {1, 29, 0.006113, 0.171755},
                       {4, 20, 0.080658, 0.416017},
                       {950, 1000, 0.934686, 0.961870},
                       {990, 1000, 0.981691, 0.994559},
                       {999, 1000, 0.994357, 0.999823},
                       {1000, 1000, 0.996173, 1},
                       {9900, 10000, 0.987853, 0.991771},
                       {0, 1, 0, 0.793451},
                       {1, 1, 0.206549, 1}};
  for (const Row& row : kRows) {
    const Interval found = wilson_interval(row.successes, row.trials);
    CAPTURE(row.successes);
    CAPTURE(row.trials);
    CHECK(std::abs(found.low - row.low) < 6e-7);
    CHECK(std::abs(found.high - row.high) < 6e-7);
  }
}

TEST_CASE("the interval's ends are where the score test just rejects") {
  for (const int successes : {1, 7, 50, 93}) {
    const double share = successes / 100.0;
    const Interval found = wilson_interval(successes, 100, 2.5);
    for (const double p : {found.low, found.high}) {
      CHECK(std::abs(share - p) ==
            doctest::Approx(2.5 * std::sqrt(p * (1 - p) / 100)).epsilon(1e-9));
    }
  }
}

TEST_CASE("the interval stays inside zero and one, mirrors, and narrows with more trials") {
  CHECK(wilson_interval(0, 1000).low == 0);
  CHECK(wilson_interval(1000, 1000).high == 1);
  const Interval few = wilson_interval(30, 100);
  const Interval other = wilson_interval(70, 100);
  CHECK(few.low == doctest::Approx(1 - other.high).epsilon(1e-14));
  const Interval many = wilson_interval(30'000'000'000, 100'000'000'000);
  CHECK(many.low > few.low);
  CHECK(many.high < few.high);
  CHECK(many.low < 0.3);
  CHECK(many.high > 0.3);
}

}  // namespace
}  // namespace bandwright
