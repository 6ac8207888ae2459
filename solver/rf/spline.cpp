#include "solver/rf/spline.h"

#include <algorithm>
#include <cstddef>

namespace bandwright {
namespace {

// Solves a tridiagonal system in place of `right`. Elimination without exchange of rows is safe
// here: with positive steps every pivot of the not-a-knot system stays positive.
void solve_tridiagonal(const std::vector<double>& lower, std::vector<double> diagonal,
                       const std::vector<double>& upper, std::vector<Complex>& right) {
  const std::size_t n = diagonal.size();
  for (std::size_t i = 1; i < n; ++i) {
    const double factor = lower[i] / diagonal[i - 1];
    diagonal[i] -= factor * upper[i - 1];
    right[i] -= factor * right[i - 1];
  }
  right[n - 1] /= diagonal[n - 1];
  for (std::size_t i = n - 1; i-- > 0;) {
    right[i] = (right[i] - upper[i] * right[i + 1]) / diagonal[i];
  }
}

// Slopes at the knots of the not-a-knot spline with steps `h` and chord slopes `d`; four or more
// knots.
std::vector<Complex> cubic_slopes(const std::vector<double>& h, const std::vector<Complex>& d) {
  const std::size_t n = h.size() + 1;
  std::vector<double> lower(n), diagonal(n), upper(n);
  std::vector<Complex> right(n);
  const double first = h[0] + h[1];
  diagonal[0] = h[1];
  upper[0] = first;
  right[0] = ((h[0] + 2 * first) * h[1] * d[0] + h[0] * h[0] * d[1]) / first;
  for (std::size_t i = 1; i + 1 < n; ++i) {
    lower[i] = h[i];
    diagonal[i] = 2 * (h[i - 1] + h[i]);
    upper[i] = h[i - 1];
    right[i] = 3.0 * (h[i] * d[i - 1] + h[i - 1] * d[i]);
  }
  const double a = h[n - 3];
  const double b = h[n - 2];
  lower[n - 1] = a + b;
  diagonal[n - 1] = a;
  right[n - 1] = (b * b * d[n - 3] + (2 * (a + b) + b) * a * d[n - 2]) / (a + b);
  solve_tridiagonal(lower, std::move(diagonal), upper, right);
  return right;
}

std::vector<Complex> slopes(const std::vector<double>& h, const std::vector<Complex>& d) {
  switch (h.size()) {
    case 0:
      return {0.0};
    case 1:
      return {d[0], d[0]};
    case 2: {
      const Complex middle = (h[1] * d[0] + h[0] * d[1]) / (h[0] + h[1]);
      return {2.0 * d[0] - middle, middle, 2.0 * d[1] - middle};
    }
    default:
      return cubic_slopes(h, d);
  }
}

}  // namespace

Spline::Spline(std::vector<double> knots, std::vector<Complex> values)
    : knots_(std::move(knots)), values_(std::move(values)) {
  if (knots_.size() > 1) span_ = knots_.back() - knots_.front();
  std::vector<double> steps;
  std::vector<Complex> chords;
  for (std::size_t i = 0; i + 1 < knots_.size(); ++i) {
    steps.push_back((knots_[i + 1] - knots_[i]) / span_);
    chords.push_back((values_[i + 1] - values_[i]) / steps.back());
  }
  slopes_ = slopes(steps, chords);
}

Complex Spline::operator()(double x) const {
  const auto after = std::upper_bound(knots_.begin(), knots_.end(), x);
  if (after == knots_.end()) return values_.back();
  if (after == knots_.begin()) return values_.front();
  const std::size_t i = static_cast<std::size_t>(after - knots_.begin()) - 1;
  const double h = (knots_[i + 1] - knots_[i]) / span_;
  const double t = (x - knots_[i]) / (knots_[i + 1] - knots_[i]);
  const Complex rise = values_[i + 1] - values_[i];
  const Complex bend = h * (slopes_[i] + slopes_[i + 1]) - 2.0 * rise;
  return values_[i] + t * (h * slopes_[i] + t * (rise - h * slopes_[i] - bend + t * bend));
}

}  // namespace bandwright
