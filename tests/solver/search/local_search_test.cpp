#include "solver/search/local_search.h"

#include <doctest/doctest.h>

#include <cmath>

using namespace bandwright;

TEST_CASE("a value that is not finite is never kept") {
  const LocalObjective broken = [](const double* x) {
    return x[0] > 0.3 ? std::nan("") : -std::pow(x[0] - 0.4, 2) - x[1] * x[1];
  };
  for (LocalMethod method : {LocalMethod::principal_axis, LocalMethod::simplex}) {
    LocalOptions options;
    options.method = method;
    options.most_evaluations = 500;
    const std::vector<double> start{-1, 1};
    const LocalBest best = maximise(broken, start, options);
    CHECK(std::isfinite(best.value));
    CHECK(best.point[0] <= 0.3);
    CHECK(best.value > -0.1);
  }
}

TEST_CASE("the best point is kept even when the evaluations run out") {
  double seen = -1e9;
  const LocalObjective hill = [&](const double* x) {
    const double value = -std::pow(x[0] - 2, 2) - 10 * std::pow(x[1] + 1, 2);
    seen = std::max(seen, value);
    return value;
  };
  LocalOptions options;
  options.most_evaluations = 25;
  options.value_tolerance = 0;
  const std::vector<double> start{0, 0};
  const LocalBest best = maximise(hill, start, options);
  CHECK(best.value == seen);
  CHECK(hill(best.point.data()) == best.value);
}

TEST_CASE("the least of several kinked margins is driven to its peak") {
  // The peak of min(x, 1 - x + y, 2 - y) is where all three meet: x = 1, y = 1.
  const LocalMargins planes = [](const double* p, double* to) {
    to[0] = p[0];
    to[1] = 1 - p[0] + p[1];
    to[2] = 2 - p[1];
  };
  LocalOptions options;
  options.value_tolerance = 1e-6;
  options.most_evaluations = 500;
  const std::vector<double> start{-3, 2};
  const LocalBest best = maximise_least(planes, 3, start, options);
  CHECK(best.value == doctest::Approx(1).epsilon(1e-5));
}

TEST_CASE("the same seed gives the same path") {
  const LocalObjective wavy = [](const double* x) {
    return std::sin(3 * x[0]) * std::cos(2 * x[1]) - 0.1 * (x[0] * x[0] + x[1] * x[1]);
  };
  LocalOptions options;
  options.seed = 5;
  const std::vector<double> start{0.7, -0.2};
  const LocalBest a = maximise(wavy, start, options), b = maximise(wavy, start, options);
  CHECK(a.point == b.point);
  CHECK(a.evaluations == b.evaluations);
}
