#include "solver/limit/rational_basis.h"

#include <doctest/doctest.h>

#include <cmath>
#include <numbers>

namespace bandwright {
namespace {

using std::numbers::pi;

std::size_t functions_of(const std::vector<PolePair>& poles) {
  std::size_t count = 0;
  for (const PolePair& pole : poles) count += pole.functions();
  return count;
}

std::vector<Complex> values_at(const std::vector<PolePair>& poles, double frequency) {
  std::vector<Complex> values(functions_of(poles));
  evaluate_basis(poles, frequency, values);
  return values;
}

TEST_CASE("the functions are orthonormal on the imaginary axis") {
  const std::vector<PolePair> poles{{1, 0}, {0.5, 0.8}, {0.2, 1.1}, {0.3, 0}, {0.2, 1.1}};
  const std::size_t count = functions_of(poles);
  REQUIRE(count == 8);
  // With w = tan(t/2) the integrand is smooth and periodic in t: equal steps are exact.
  const int steps = 4000;
  std::vector<Complex> gram(count * count);
  for (int n = 0; n < steps; ++n) {
    const double t = -pi + (n + 0.5) * 2 * pi / steps;
    const double w = std::tan(t / 2);
    const double weight = (1 + w * w) / 2 / steps;
    const auto v = values_at(poles, w);
    for (std::size_t i = 0; i < count; ++i) {
      for (std::size_t j = 0; j < count; ++j) {
        gram[i * count + j] += weight * v[i] * std::conj(v[j]);
      }
    }
  }
  for (std::size_t i = 0; i < count; ++i) {
    for (std::size_t j = 0; j < count; ++j) {
      CHECK(std::abs(gram[i * count + j] - (i == j ? 1.0 : 0.0)) < 1e-10);
    }
  }
}

TEST_CASE("the functions are those of real networks: conjugate at the negative frequency") {
  const std::vector<PolePair> poles{{0.1, 0.9}, {0.4, 0}, {1e-6, 1}};
  const auto up = values_at(poles, 0.95);
  const auto down = values_at(poles, -0.95);
  for (std::size_t i = 0; i < up.size(); ++i) {
    CHECK(std::abs(up[i] - std::conj(down[i])) < 1e-12 * std::abs(up[i]));
  }
}

TEST_CASE("levels add poles and never repeat one") {
  const auto bands = spaced_bands({{0.2, 0.3}, {0.31, 1}});
  const auto four = pole_levels(bands, 4);
  const auto two = pole_levels(bands, 2);
  REQUIRE(four.size() == 4);
  std::vector<PolePair> all;
  for (std::size_t n = 0; n < four.size(); ++n) {
    CHECK_FALSE(four[n].empty());
    if (n < two.size()) CHECK(two[n].size() == four[n].size());
    all.insert(all.end(), four[n].begin(), four[n].end());
  }
  for (std::size_t i = 0; i < all.size(); ++i) {
    CHECK(all[i].distance > 0);
    for (std::size_t j = 0; j < i; ++j) {
      CHECK((std::abs(all[i].distance - all[j].distance) > 1e-9 * all[i].distance ||
             std::abs(all[i].centre - all[j].centre) > 1e-9 * all[i].distance));
    }
  }
}

TEST_CASE("every band edge has poles much closer than the smallest gap") {
  const auto bands = spaced_bands({{0.2, 0.3}, {0.31, 1}});
  for (const double edge : {0.2, 0.3, 0.31, 1.0}) {
    double closest = 1;
    for (const auto& level : pole_levels(bands, 3)) {
      for (const PolePair& pole : level) {
        if (pole.centre == edge) closest = std::min(closest, pole.distance);
      }
    }
    CHECK(closest < 1e-5);
  }
}

}  // namespace
}  // namespace bandwright
