#include "solver/rf/spline.h"

#include <doctest/doctest.h>

#include <Eigen/Dense>
#include <cmath>
#include <vector>

#include "solver/base/random.h"

namespace bandwright {
namespace {

// The not-a-knot spline straight from its definition: four coefficients on each interval, one dense
// system of all the conditions. Slow and unlike the spline under test.
class DenseSpline {
 public:
  DenseSpline(std::vector<double> x, const std::vector<Complex>& y) : x_(std::move(x)) {
    const Eigen::Index pieces = static_cast<Eigen::Index>(x_.size()) - 1;
    Eigen::MatrixXd a = Eigen::MatrixXd::Zero(4 * pieces, 4 * pieces);
    Eigen::MatrixXcd b = Eigen::MatrixXcd::Zero(4 * pieces, 1);
    Eigen::Index row = 0;
    for (Eigen::Index i = 0; i < pieces; ++i) {
      const double h = x_[i + 1] - x_[i];
      a(row, 4 * i) = 1;
      b(row++, 0) = y[i];
      for (int k = 0; k < 4; ++k) a(row, 4 * i + k) = std::pow(h, k);
      b(row++, 0) = y[i + 1];
      if (i + 1 == pieces) break;
      for (int k = 1; k < 4; ++k) a(row, 4 * i + k) = k * std::pow(h, k - 1);
      a(row++, 4 * i + 5) = -1;
      for (int k = 2; k < 4; ++k) a(row, 4 * i + k) = k * (k - 1) * std::pow(h, k - 2);
      a(row++, 4 * i + 6) = -2;
    }
    for (const Eigen::Index i : {Eigen::Index{0}, pieces - 2}) {
      a(row, 4 * i + 3) = 1;
      a(row++, 4 * i + 7) = -1;
    }
    c_ = a.cast<Complex>().fullPivLu().solve(b);
  }

  Complex operator()(double x) const {
    Eigen::Index i = 0;
    while (i + 2 < static_cast<Eigen::Index>(x_.size()) && x > x_[i + 1]) ++i;
    const double t = x - x_[i];
    return c_(4 * i, 0) + t * (c_(4 * i + 1, 0) + t * (c_(4 * i + 2, 0) + t * c_(4 * i + 3, 0)));
  }

 private:
  std::vector<double> x_;
  Eigen::MatrixXcd c_;
};

// Random knots, very uneven, and values.
void draw(int count, const RandomStream& stream, std::vector<double>& x, std::vector<Complex>& y) {
  double at = 1;
  for (int i = 0; i < count; ++i) {
    at += 0.02 + std::pow(stream.uniform(3 * i), 4);
    x.push_back(at);
    y.emplace_back(stream.symmetric(3 * i + 1), stream.symmetric(3 * i + 2));
  }
}

TEST_CASE("four or more samples reproduce every cubic polynomial, up to the ends") {
  const auto cubic = [](double f) {
    const double t = (f - 150e6) / 30e6;
    return Complex(0.3 - 0.2 * t + 0.4 * t * t - 0.1 * t * t * t, 0.1 + t * t * t);
  };
  for (const std::vector<double>& knots :
       {std::vector<double>{120e6, 125e6, 160e6, 180e6},
        std::vector<double>{120e6, 121e6, 150e6, 151e6, 170e6, 180e6}}) {
    std::vector<Complex> values;
    for (const double f : knots) values.push_back(cubic(f));
    const Spline spline(knots, values);
    for (double f = 120e6; f <= 180e6; f += 0.37e6) {
      CHECK(std::abs(spline(f) - cubic(f)) < 1e-13);
    }
  }
}

TEST_CASE("fewer samples give a constant, a line and a parabola") {
  const auto square = [](double x) { return Complex(1 + 2 * x + 3 * x * x, -x * x); };
  const Spline point({5}, {Complex(1, 2)});
  CHECK(point(5) == Complex(1, 2));
  const Spline line({1, 3}, {Complex(0, 1), Complex(4, -1)});
  CHECK(std::abs(line(1.5) - Complex(1, 0.5)) < 1e-15);
  const Spline parabola({1, 1.5, 4}, {square(1), square(1.5), square(4)});
  for (double x = 1; x <= 4; x += 0.125) CHECK(std::abs(parabola(x) - square(x)) < 1e-12);
}

TEST_CASE("a spline agrees with a dense solution of the conditions that define it") {
  for (const int count : {4, 5, 6, 9, 17, 40}) {
    std::vector<double> x;
    std::vector<Complex> y;
    draw(count, RandomStream(11, count), x, y);
    const Spline spline(x, y);
    const DenseSpline dense(x, y);
    double largest = 1;
    double error = 0;
    for (int i = 0; i <= 500; ++i) {
      const double at = x.front() + (x.back() - x.front()) * i / 500.0;
      largest = std::max(largest, std::abs(dense(at)));
      error = std::max(error, std::abs(spline(at) - dense(at)));
    }
    CAPTURE(count);
    CHECK(error < 1e-9 * largest);
  }
}

TEST_CASE("a spline passes through its samples exactly") {
  std::vector<double> x;
  std::vector<Complex> y;
  draw(60, RandomStream(3, 1), x, y);
  const Spline spline(x, y);
  for (std::size_t i = 0; i < x.size(); ++i) CHECK(spline(x[i]) == y[i]);
}

}  // namespace
}  // namespace bandwright
