// What can be bought for one element value, and how a real part differs from an ideal one.
#pragma once

#include <optional>
#include <variant>
#include <vector>

#include "solver/rf/preferred_values.h"

namespace bandwright {

// Any value at all, as for a trimmed or printed part.
struct AnyValue {
  bool operator==(const AnyValue&) const = default;
};
using ValueRule = std::variant<AnyValue, Series, std::vector<double>>;

// Half-width of the spread of a value, relative to it or absolute (in its SI unit).
struct Tolerance {
  double relative = 0;
  double absolute = 0;  // wins when above 0
  double half_width(double value) const { return absolute > 0 ? absolute : relative * value; }
  bool operator==(const Tolerance&) const = default;
};

// Q(f) = value * (f / at_hz) ^ exponent.
struct QualityFactor {
  double value = 0;
  double at_hz = 1;
  double exponent = 0;
  double at(double frequency_hz) const;
  bool operator==(const QualityFactor&) const = default;
};

// A part for one value of an element.
//
// An inductor L with quality factor Q and self-resonance fr is (jwL + wL/Q) in parallel with the
// capacitance 1/((2 pi fr)^2 L). A capacitor C is in series with wanted losses 1/(wCQ), an
// equivalent series resistance and a series inductance. Tolerance moves L and C; Q, resistance,
// self-resonance and series inductance stay.
struct Part {
  ValueRule values = Series::e24;
  Tolerance tolerance{0.05, 0};
  std::optional<QualityFactor> q;
  double esr_ohm = 0;
  std::optional<double> self_resonance_hz;
  double self_inductance_h = 0;

  bool lossless() const { return !q && esr_ohm == 0; }
  bool operator==(const Part&) const = default;
};

// The values `part` offers in [min, max], increasing; empty for AnyValue.
std::vector<double> offered_values(const Part& part, double min, double max);

}  // namespace bandwright
