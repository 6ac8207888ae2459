#include "solver/limit/band_grid.h"

#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>

namespace bandwright {
namespace {

SpacedBand alone(double from_hz, double to_hz) {
  return spaced_bands({{from_hz, to_hz}}).front();
}

template <class F>
double integral(const std::vector<QuadratureNode>& nodes, F f) {
  double sum = 0;
  for (const QuadratureNode& node : nodes) sum += node.weight_hz * f(node.frequency_hz);
  return sum;
}

TEST_CASE("bands are sorted, merged where they touch, and dropped where they have no width") {
  const auto merged = merged_bands({{5, 6}, {1, 2}, {3, 3}, {1.5, 2.5}, {2.5, 2.75}, {5.2, 5.4}});
  REQUIRE(merged.size() == 2);
  CHECK(merged[0].from_hz == 1);
  CHECK(merged[0].to_hz == 2.75);
  CHECK(merged[1].from_hz == 5);
  CHECK(merged[1].to_hz == 6);
}

TEST_CASE("a band knows the gaps to its neighbours and to its own mirror image") {
  const auto bands = spaced_bands({{1, 2}, {2.25, 4}});
  CHECK(bands[0].gap_below_hz == 2);
  CHECK(bands[0].gap_above_hz == 0.25);
  CHECK(bands[0].scale_below_hz() == 1);
  CHECK(bands[0].scale_above_hz() == 0.25);
  CHECK(bands[1].gap_below_hz == 0.25);
  CHECK(bands[1].scale_above_hz() == 1.75);
  CHECK_FALSE(bands[0].meets_below());
  CHECK(alone(0, 1).meets_below());
  CHECK_FALSE(alone(1e-6, 1).meets_below());
}

TEST_CASE("nodes lie inside the band in increasing order, with positive weights") {
  for (const SpacedBand& band : {alone(0, 1), alone(140e6, 160e6), alone(1e3, 1e9)}) {
    const auto nodes = band_nodes(band, {});
    CHECK(nodes.front().frequency_hz > band.band.from_hz);
    CHECK(nodes.back().frequency_hz <= band.band.to_hz);
    CHECK(std::is_sorted(nodes.begin(), nodes.end(), [](const auto& a, const auto& b) {
      return a.frequency_hz < b.frequency_hz;
    }));
    CHECK(std::all_of(nodes.begin(), nodes.end(), [](const auto& n) { return n.weight_hz > 0; }));
  }
}

TEST_CASE("functions that turn with the logarithm of the distance from an edge are integrated") {
  // Integral of cos(2 ln x) over 0..1 is 1/5, that of sin(2 ln x) is -2/5.
  const auto nodes = band_nodes(alone(1, 2), {});
  CHECK(integral(nodes, [](double) { return 1.0; }) == doctest::Approx(1).epsilon(1e-14));
  const auto below = [](double f) { return std::cos(2 * std::log(f - 1)); };
  const auto above = [](double f) { return std::sin(2 * std::log(2 - f)); };
  CHECK(integral(nodes, below) == doctest::Approx(0.2).epsilon(1e-7));
  CHECK(integral(nodes, above) == doctest::Approx(-0.4).epsilon(1e-7));
}

TEST_CASE("a corner at a knot costs no accuracy") {
  const std::vector<double> knots{0.5, 1.3217, 1.777, 3};
  const auto bent = [](double f) { return std::abs(f - 1.3217) + std::abs(f - 1.777); };
  const double exact = (0.3217 * 0.3217 + 0.6783 * 0.6783 + 0.777 * 0.777 + 0.223 * 0.223) / 2;
  CHECK(integral(band_nodes(alone(1, 2), knots), bent) == doctest::Approx(exact).epsilon(1e-13));
  CHECK(std::abs(integral(band_nodes(alone(1, 2), {}), bent) - exact) > 1e-8);
}

TEST_CASE("the number of nodes stays bounded however many knots there are") {
  std::vector<double> knots;
  for (int i = 0; i < 10'000; ++i) knots.push_back(1 + (i + 0.5) / 10'000);
  CHECK(band_nodes(alone(1, 2), knots).size() < 5'000);
}

}  // namespace
}  // namespace bandwright
