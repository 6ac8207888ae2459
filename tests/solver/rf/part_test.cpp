#include "solver/rf/part.h"

#include <doctest/doctest.h>

namespace bandwright {
namespace {

TEST_CASE("a part offers the values of its series or list inside the interval, increasing") {
  Part part;
  part.values = Series::e6;
  CHECK(offered_values(part, 2e-9, 5e-9) == std::vector<double>{2.2e-9, 3.3e-9, 4.7e-9});
  part.values = std::vector<double>{23e-9, 19e-9, 21e-9, 19e-9, 1.9e-9};
  CHECK(offered_values(part, 10e-9, 21e-9) == std::vector<double>{19e-9, 21e-9});
  part.values = AnyValue{};
  CHECK(offered_values(part, 1e-9, 1).empty());
}

TEST_CASE("an interval without a positive value offers no preferred value") {
  Part part;
  CHECK(offered_values(part, 0, 0).empty());
  CHECK(offered_values(part, 5, 1).empty());
  CHECK(offered_values(part, 0, 1e-300).size() > 24);
}

TEST_CASE("a quality factor follows its power law") {
  const QualityFactor q{60, 150e6, 0.5};
  CHECK(q.at(150e6) == doctest::Approx(60).epsilon(1e-14));
  CHECK(q.at(600e6) == doctest::Approx(120).epsilon(1e-14));
  CHECK(QualityFactor{60, 150e6, 0}.at(1e9) == doctest::Approx(60).epsilon(1e-14));
}

TEST_CASE("an absolute tolerance wins over a relative one") {
  CHECK(Tolerance{0.05, 0}.half_width(10e-12) == doctest::Approx(0.5e-12).epsilon(1e-14));
  CHECK(Tolerance{0.05, 0.1e-12}.half_width(0.5e-12) == 0.1e-12);
}

TEST_CASE("only quality factor and series resistance make a part lossy") {
  Part part;
  part.self_resonance_hz = 1e9;
  part.self_inductance_h = 1e-9;
  CHECK(part.lossless());
  part.esr_ohm = 0.1;
  CHECK_FALSE(part.lossless());
  part.esr_ohm = 0;
  part.q = QualityFactor{60, 1e6, 0};
  CHECK_FALSE(part.lossless());
}

TEST_CASE("parts are equal only when every figure is") {
  Part a, b;
  CHECK(a == b);
  b.q = QualityFactor{60, 1e6, 0};
  CHECK_FALSE(a == b);
  b = a;
  b.values = std::vector<double>{1.0};
  CHECK_FALSE(a == b);
}

}  // namespace
}  // namespace bandwright
