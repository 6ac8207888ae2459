#include "solver/rf/one_port.h"

#include <doctest/doctest.h>

#include <cmath>
#include <limits>
#include <numbers>

namespace bandwright {
namespace {

TEST_CASE("a sampled port covers what lies between its samples and nothing else") {
  const OnePort port =
      OnePort::from_reflection({100e6, 110e6, 130e6}, {0.1, Complex(0.2, 0.1), 0.3}, 50);
  CHECK(port.first_hz() == 100e6);
  CHECK(port.last_hz() == 130e6);
  CHECK(port.covers(100e6));
  CHECK(port.covers(117e6));
  CHECK(port.covers(130e6));
  CHECK_FALSE(port.covers(std::nextafter(130e6, 1e9)));
  CHECK_FALSE(port.covers(std::nextafter(100e6, 0)));
  CHECK_FALSE(port.covers(std::numeric_limits<double>::quiet_NaN()));
  CHECK(port.sample_hz().size() == 3);
  CHECK_FALSE(port.is_constant());
}

TEST_CASE("one sample covers its own frequency alone") {
  const OnePort port = OnePort::from_reflection({100e6}, {0.1}, 50);
  CHECK(port.covers(100e6));
  CHECK_FALSE(port.covers(100.1e6));
  CHECK(std::abs(port.reflection(100e6, 50) - 0.1) < 1e-15);
}

TEST_CASE("a sampled port keeps its samples at their own reference and converts to any other") {
  const Complex impedance(20, -35);
  const Complex at_75 = reflection_from_impedance(impedance, 75);
  const OnePort port = OnePort::from_reflection({1e9, 2e9}, {at_75, 0.5}, 75);
  CHECK(std::abs(port.reflection(1e9, 75) - at_75) < 1e-15);
  CHECK(std::abs(port.impedance_ohm(1e9) - impedance) < 1e-12);
  CHECK(std::abs(port.reflection(1e9, 50) - reflection_from_impedance(impedance, 50)) < 1e-14);
}

TEST_CASE("between samples the reflection is interpolated, not the impedance") {
  const OnePort port = OnePort::from_reflection({1e9, 2e9}, {Complex(-0.9), Complex(0.9)}, 50);
  CHECK(std::abs(port.impedance_ohm(1.5e9) - 50.0) < 1e-12);
}

TEST_CASE("constants and circuits cover every frequency above zero") {
  const OnePort constant = OnePort::constant(Complex(50, -10));
  CHECK(constant.is_constant());
  CHECK(constant.constant_ohm() == Complex(50, -10));
  CHECK(constant.covers(1));
  CHECK(constant.covers(1e15));
  CHECK_FALSE(constant.covers(0));
  CHECK(constant.first_hz() == 0);
  CHECK(constant.last_hz() == std::numeric_limits<double>::infinity());
  CHECK(constant.impedance_ohm(3e6) == Complex(50, -10));

  const OnePort coil = OnePort::from_circuit({Circuit::Type::inductor, 1e-9, {}});
  CHECK(coil.covers(1e15));
  CHECK(coil.sample_hz().empty());
  CHECK(std::abs(coil.impedance_ohm(1e9) - Complex(0, 2 * std::numbers::pi)) < 1e-14);
}

}  // namespace
}  // namespace bandwright
