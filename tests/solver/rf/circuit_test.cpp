#include "solver/rf/circuit.h"

#include <doctest/doctest.h>

#include <cmath>
#include <numbers>

namespace bandwright {
namespace {

using Type = Circuit::Type;

Circuit leaf(Type type, double value) {
  return {type, value, {}};
}
Circuit group(Type type, std::vector<Circuit> parts) {
  return {type, 0, std::move(parts)};
}

void check_close(Complex found, Complex wanted) {
  CHECK(std::abs(found - wanted) <= 1e-12 * std::abs(wanted));
}

TEST_CASE("a circuit's impedance follows the rules of series and parallel connection") {
  // The classical low-pass load 2.3 H + (1 ohm || 1.2 F) at 0.7 rad/s, by hand.
  const Circuit load = group(
      Type::series, {leaf(Type::inductor, 2.3),
                     group(Type::parallel, {leaf(Type::resistor, 1), leaf(Type::capacitor, 1.2)})});
  const Complex wanted = Complex(0, 2.3 * 0.7) + 1.0 / Complex(1, 1.2 * 0.7);
  check_close(load.wave(0.7 / (2 * std::numbers::pi)).impedance_ohm(), wanted);
}

TEST_CASE("a short and an open circuit are ordinary numbers") {
  const Circuit wire = leaf(Type::resistor, 0);
  const Circuit gap = leaf(Type::capacitor, 0);
  const Circuit fifty = leaf(Type::resistor, 50);
  const auto reflection = [](const Circuit& c) { return c.wave(1e9).reflection(50); };
  CHECK(reflection(wire) == Complex(-1));
  CHECK(reflection(gap) == Complex(1));
  CHECK(reflection(group(Type::parallel, {wire, wire, fifty})) == Complex(-1));
  CHECK(reflection(group(Type::series, {gap, gap, fifty})) == Complex(1));
  CHECK(std::abs(reflection(group(Type::parallel, {gap, fifty}))) < 1e-15);
  CHECK(std::abs(reflection(group(Type::series, {wire, fifty}))) < 1e-15);
}

TEST_CASE("many parts of extreme values do not overflow") {
  Circuit many = group(Type::series, {});
  for (int i = 0; i < 2000; ++i) many.parts.push_back(leaf(Type::resistor, 1e12));
  check_close(many.wave(1e9).impedance_ohm(), 2000e12);
  many.type = Type::parallel;
  check_close(many.wave(1e9).impedance_ohm(), 1e12 / 2000);
  for (Circuit& part : many.parts) part = leaf(Type::capacitor, 1e-15);
  check_close(many.wave(1e9).impedance_ohm(),
              1.0 / Complex(0, 2 * std::numbers::pi * 1e9 * 2000e-15));
}

}  // namespace
}  // namespace bandwright
