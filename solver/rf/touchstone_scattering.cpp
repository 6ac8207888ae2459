#include "solver/rf/touchstone_scattering.h"

#include <Eigen/LU>
#include <cmath>

namespace bandwright {
namespace {

using Matrix = Eigen::Matrix<Complex, Eigen::Dynamic, Eigen::Dynamic, Eigen::RowMajor>;

// A v + B i = 0 with voltages and currents in ohm and siemens.
struct Relation {
  Matrix of_voltage;
  Matrix of_current;
};

Relation relation(NetworkParameter parameter, const Matrix& m) {
  const Eigen::Index n = m.rows();
  Relation r{Matrix::Identity(n, n), Matrix::Identity(n, n)};
  switch (parameter) {
    case NetworkParameter::s:
      break;  // not a relation of this form
    case NetworkParameter::z:
      r.of_current = -m;
      break;
    case NetworkParameter::y:
      r.of_voltage = -m;
      break;
    case NetworkParameter::h:  // V1 = h11 I1 + h12 V2, I2 = h21 I1 + h22 V2
      r.of_voltage << 1.0, -m(0, 1), 0.0, -m(1, 1);
      r.of_current << -m(0, 0), 0.0, -m(1, 0), 1.0;
      break;
    case NetworkParameter::g:  // I1 = g11 V1 + g12 I2, V2 = g21 V1 + g22 I2
      r.of_voltage << -m(0, 0), 0.0, -m(1, 0), 1.0;
      r.of_current << 1.0, -m(0, 1), 0.0, -m(1, 1);
      break;
  }
  return r;
}

}  // namespace

bool to_scattering(NetworkParameter parameter, std::span<const double> reference_ohm,
                   std::span<Complex> matrix) {
  const Eigen::Index n = static_cast<Eigen::Index>(reference_ohm.size());
  Eigen::Map<Matrix> given(matrix.data(), n, n);
  if (parameter != NetworkParameter::s) {
    Relation r = relation(parameter, given);
    for (Eigen::Index port = 0; port < n; ++port) {
      const double root = std::sqrt(reference_ohm[static_cast<std::size_t>(port)]);
      r.of_voltage.col(port) *= root;
      r.of_current.col(port) /= root;
    }
    const Matrix left = r.of_voltage - r.of_current;
    const Matrix right = -(r.of_voltage + r.of_current);
    given = Eigen::PartialPivLU<Matrix>(left).solve(right);
  }
  return given.array().isFinite().all();
}

}  // namespace bandwright
