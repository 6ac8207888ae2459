#include "solver/rf/circuit.h"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace bandwright {
namespace {

// Only the ratio counts; without this the products of many parts would overflow.
Wave scaled(Wave wave) {
  const double size = std::max(std::abs(wave.voltage), std::abs(wave.current));
  if (!(size > 0) || !std::isfinite(size)) return wave;
  return {wave.voltage / size, wave.current / size};
}

// One current through both. Two open circuits in series are an open circuit.
Wave in_series(const Wave& a, const Wave& b) {
  if (a.current == 0.0 && b.current == 0.0) return {1.0, 0.0};
  return scaled({a.voltage * b.current + b.voltage * a.current, a.current * b.current});
}

// One voltage across both. Two short circuits in parallel are a short circuit.
Wave in_parallel(const Wave& a, const Wave& b) {
  if (a.voltage == 0.0 && b.voltage == 0.0) return {0.0, 1.0};
  return scaled({a.voltage * b.voltage, a.current * b.voltage + b.current * a.voltage});
}

}  // namespace

Wave Circuit::wave(double frequency_hz) const {
  const double omega = 2.0 * std::numbers::pi * frequency_hz;
  switch (type) {
    case Type::resistor:
      return {value, 1.0};
    case Type::inductor:
      return {Complex(0, omega * value), 1.0};
    case Type::capacitor:
      return {1.0, Complex(0, omega * value)};
    case Type::series: {
      Wave sum{0.0, 1.0};
      for (const Circuit& part : parts) sum = in_series(sum, part.wave(frequency_hz));
      return sum;
    }
    case Type::parallel:
      break;
  }
  Wave sum{1.0, 0.0};
  for (const Circuit& part : parts) sum = in_parallel(sum, part.wave(frequency_hz));
  return sum;
}

}  // namespace bandwright
