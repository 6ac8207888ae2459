// The series of IEC 60063, checked against several agreeing published tables.

#include "solver/rf/preferred_values.h"

#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <functional>
#include <string>
#include <vector>

namespace bandwright {
namespace {

std::vector<double> list(Series series) {
  const auto values = decade(series);
  return {values.begin(), values.end()};
}

bool holds(Series series, double value) {
  const auto values = decade(series);
  return std::find(values.begin(), values.end(), value) != values.end();
}

// The largest relative error when any value is replaced by the geometrically closest one.
double largest_snap_error(Series series) {
  std::vector<double> values = list(series);
  values.push_back(10 * values.front());
  double worst = 0;
  for (std::size_t i = 0; i + 1 < values.size(); ++i) {
    worst = std::max(worst, std::sqrt(values[i + 1] / values[i]) - 1);
  }
  return worst;
}

TEST_CASE("the small series are those of the standard's table") {
  CHECK(list(Series::e3) == std::vector<double>{1.0, 2.2, 4.7});
  CHECK(list(Series::e6) == std::vector<double>{1.0, 1.5, 2.2, 3.3, 4.7, 6.8});
  CHECK(list(Series::e12) ==
        std::vector<double>{1.0, 1.2, 1.5, 1.8, 2.2, 2.7, 3.3, 3.9, 4.7, 5.6, 6.8, 8.2});
  CHECK(list(Series::e24) == std::vector<double>{1.0, 1.1, 1.2, 1.3, 1.5, 1.6, 1.8, 2.0,
                                                 2.2, 2.4, 2.7, 3.0, 3.3, 3.6, 3.9, 4.3,
                                                 4.7, 5.1, 5.6, 6.2, 6.8, 7.5, 8.2, 9.1});
}

TEST_CASE("E24 leaves the rounded powers of ten at eight places") {
  std::vector<double> irregular;
  for (int i = 0; i < 24; ++i) {
    const double formula = std::round(10 * std::pow(10.0, i / 24.0)) / 10;
    const double standard = decade(Series::e24)[i];
    if (std::abs(formula - standard) > 0.01) irregular.push_back(standard);
  }
  CHECK(irregular == std::vector<double>{2.7, 3.0, 3.3, 3.6, 3.9, 4.3, 4.7, 8.2});
}

TEST_CASE("E192 has 9.20 where the formula gives 9.19, and E48 and E96 are parts of it") {
  CHECK(decade(Series::e192).size() == 192);
  CHECK(holds(Series::e192, 9.20));
  CHECK_FALSE(holds(Series::e192, 9.19));
  for (int i = 0; i < 192; ++i) {
    const double formula = std::round(100 * std::pow(10.0, i / 192.0)) / 100;
    if (i != 185) CHECK(decade(Series::e192)[i] == doctest::Approx(formula).epsilon(1e-12));
  }
  for (int i = 0; i < 96; ++i) CHECK(decade(Series::e96)[i] == decade(Series::e192)[2 * i]);
  for (int i = 0; i < 48; ++i) CHECK(decade(Series::e48)[i] == decade(Series::e96)[2 * i]);
}

TEST_CASE("E96 has its known neighbours") {
  const std::vector<double> e96 = list(Series::e96);
  const auto run = [&](std::vector<double> values) {
    return std::search(e96.begin(), e96.end(), values.begin(), values.end()) != e96.end();
  };
  CHECK(run({2.21, 2.26, 2.32, 2.37}));
  CHECK(run({4.64, 4.75, 4.87, 4.99, 5.11}));
  CHECK(run({9.09, 9.31, 9.53, 9.76}));
}

TEST_CASE("thirteen E24 values are not in E192") {
  std::vector<double> missing;
  for (const double value : decade(Series::e24)) {
    if (!holds(Series::e192, value)) missing.push_back(value);
  }
  CHECK(missing ==
        std::vector<double>{2.2, 2.7, 3.0, 3.3, 3.6, 3.9, 4.3, 5.1, 5.6, 6.2, 6.8, 8.2, 9.1});
}

TEST_CASE("the largest snap errors are the known ones") {
  CHECK(largest_snap_error(Series::e6) == doctest::Approx(0.2247).epsilon(5e-4));
  CHECK(largest_snap_error(Series::e12) == doctest::Approx(0.1180).epsilon(5e-4));
  CHECK(largest_snap_error(Series::e24) == doctest::Approx(0.07417).epsilon(5e-4));
  CHECK(largest_snap_error(Series::e48) == doctest::Approx(0.0263).epsilon(5e-3));
  CHECK(largest_snap_error(Series::e96) == doctest::Approx(0.0149).epsilon(5e-3));
}

TEST_CASE("a preferred value is the double of its decimal figure in every decade") {
  CHECK(preferred_values(Series::e3, 1e-9, 1e-8) ==
        std::vector<double>{1e-9, 2.2e-9, 4.7e-9, 1e-8});
  CHECK(preferred_values(Series::e24, 3.0e-12, 4.0e-12) ==
        std::vector<double>{3.0e-12, 3.3e-12, 3.6e-12, 3.9e-12});
  for (const Series series : all_series()) {
    for (int exponent = -15; exponent <= 6; ++exponent) {
      const std::string tail = "e" + std::to_string(exponent);
      const double low = std::stod("1" + tail);
      const double high = std::stod("9.99" + tail);
      const std::vector<double> values = preferred_values(series, low, high);
      REQUIRE(values.size() == decade(series).size());
      for (std::size_t i = 0; i < values.size(); ++i) {
        char figure[32];
        std::snprintf(figure, sizeof figure, "%.2fe%d", decade(series)[i], exponent);
        CHECK(values[i] == std::stod(figure));
      }
    }
  }
}

TEST_CASE("both ends of the wanted interval belong to it") {
  CHECK(preferred_values(Series::e12, 4.7, 4.7) == std::vector<double>{4.7});
  CHECK(preferred_values(Series::e12, 4.71, 5.5).empty());
  CHECK(preferred_values(Series::e12, 1000, 1000) == std::vector<double>{1000});
  CHECK(preferred_values(Series::e12, 0.001, 0.001) == std::vector<double>{0.001});
}

TEST_CASE("values increase across decades and out to the ends of the range of numbers") {
  const auto values = preferred_values(Series::e6, 2.3e-308, 1.7e308);
  CHECK(values.size() > 6 * 600);
  CHECK(std::adjacent_find(values.begin(), values.end(), std::greater_equal<>()) == values.end());
}

TEST_CASE("a series is known by its exact name alone") {
  for (const Series series : all_series()) {
    CHECK(series_from_name(series_name(series)) == series);
  }
  CHECK(all_series().size() == 7);
  CHECK(series_name(Series::e192) == "E192");
  for (const char* name : {"", "e24", "E25", "E24 "}) CHECK_FALSE(series_from_name(name));
}

}  // namespace
}  // namespace bandwright
