// The equal-ripple match of a load with one reactance, in closed form.
//
// Fano, J. Franklin Inst. 249 (1950) 57-83 and 139-154; explicit element values by Levy, Proc. IEE
// 111 (1964) 1099-1106. Formulas from memory of these publications; their tables were confirmed by
// direct simulation of the ladders. For three and more elements the equal-ripple match is close to,
// but not, the best possible one (Carlin and Amstutz, IEEE Trans. CAS-28, 1981).
#pragma once

#include <algorithm>
#include <cmath>
#include <numbers>
#include <vector>

namespace bandwright::reference {

struct FanoLadder {
  double a = 0;
  double b = 0;
  double largest_reflection = 0;
  double smallest_reflection = 0;
  std::vector<double> g;         // g1 .. gn, g1 being the load's own reactance
  double last = 0;               // g(n+1)
  double source_resistance = 0;  // with a load resistance of 1
};

namespace detail {

// The root of a continuous f with f(low) < 0 < f(high), by bisection to the last bit.
template <class F>
double root(F f, double low, double high) {
  for (int i = 0; i < 200; ++i) {
    const double middle = 0.5 * (low + high);
    (f(middle) < 0 ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

// The left side of the optimality condition, tanh(nx) / cosh(x).
inline double optimality(int n, double x) {
  return std::tanh(n * x) / std::cosh(x);
}

// Where that function has its maximum: a lies above, b below.
inline double peak(int n) {
  return root(
      [n](double x) {
        return std::sinh(n * x) * std::cosh(n * x) * std::sinh(x) - n * std::cosh(x);
      },
      1e-9, 20.0);
}

}  // namespace detail

// The ladder of `n` reactances, the load's own included, for a shunt R-C load (R = 1, band 0 to 1
// rad/s, C = 1/decrement).
inline FanoLadder fano_ladder(int n, double decrement) {
  using std::numbers::pi;
  const double first = std::sin(pi / (2 * n));
  // sinh b follows from a; the optimality condition then fixes a.
  const auto b_of = [&](double a) { return std::asinh(std::sinh(a) - 2 * decrement * first); };
  FanoLadder ladder;
  const double peak = detail::peak(n);
  const double low = std::max(peak, std::asinh(2 * decrement * first));
  const double high = std::asinh(std::sinh(peak) + 2 * decrement * first);
  ladder.a = detail::root(
      [&](double a) { return detail::optimality(n, b_of(a)) - detail::optimality(n, a); }, low,
      high);
  ladder.b = b_of(ladder.a);
  ladder.largest_reflection = std::cosh(n * ladder.b) / std::cosh(n * ladder.a);
  ladder.smallest_reflection = std::sinh(n * ladder.b) / std::sinh(n * ladder.a);
  const double x = std::sinh(ladder.a);
  const double y = std::sinh(ladder.b);
  ladder.g.push_back(2 * first / (x - y));
  for (int i = 1; i < n; ++i) {
    const double s = std::sin(i * pi / n);
    const double product = 4 * std::sin((2 * i - 1) * pi / (2 * n)) *
                           std::sin((2 * i + 1) * pi / (2 * n)) /
                           (x * x + y * y + s * s - 2 * x * y * std::cos(i * pi / n));
    ladder.g.push_back(product / ladder.g.back());
  }
  ladder.last = 2 * first / ((x + y) * ladder.g.back());
  // After a shunt capacitor (odd n) the last figure is a resistance, else a conductance.
  ladder.source_resistance = n % 2 == 1 ? ladder.last : 1 / ladder.last;
  return ladder;
}

}  // namespace bandwright::reference
