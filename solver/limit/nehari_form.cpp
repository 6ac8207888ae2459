#include "solver/limit/nehari_form.h"

#include <Eigen/Core>
#include <Eigen/Eigenvalues>
#include <cmath>
#include <numbers>
#include <span>
#include <utility>

namespace bandwright {
namespace {

using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXcd;
using Eigen::VectorXd;

// A form is counted as negative only below this, well above what rounding does to a sum of some
// thousand terms whose parts are of order 1: doubt goes to the side of the larger return loss.
constexpr double kRounding = 2e-13;
constexpr double kStepShare = 1e-6;  // of the return loss, where the descent ends
constexpr int kMostSteps = 40;

// The discs of all nodes, times the weight of the integral over 2 pi; that over negative
// frequencies equals that over positive ones and doubles it.
struct Discs {
  VectorXd outside;  // 1 - R^2
  VectorXcd centre;  // k
};

Discs discs_at(const std::vector<LoadNode>& nodes, double loss_db) {
  const double r = reflection_from_return_loss_db(loss_db);
  const double rest = (1 - r) * (1 + r);
  const auto count = static_cast<Index>(nodes.size());
  Discs discs{VectorXd(count), VectorXcd(count)};
  for (Index n = 0; n < count; ++n) {
    const LoadNode& node = nodes[static_cast<std::size_t>(n)];
    const double share = node.weight / std::numbers::pi;
    const double below = rest + r * r * node.absorbed;  // 1 - r^2 |S|^2
    const double radius = r * node.absorbed / below;
    discs.outside[n] = share * (1 - radius) * (1 + radius);
    discs.centre[n] = share * rest / below * std::conj(node.reflection);
  }
  return discs;
}

}  // namespace

struct NehariForm::Tables {
  std::vector<LoadNode> nodes;
  // The basis: one row a function, one column a node.
  MatrixXd real;
  MatrixXd imag;

  MatrixXd form(int section, double loss_db) const;
  MatrixXd hankel(int section, const VectorXcd& centre) const;
  double value(const VectorXd& v, const VectorXcd& field, double loss_db) const;
  double lowest_for(const VectorXd& v, double from_db) const;
};

NehariForm::NehariForm(std::vector<LoadNode> nodes, const std::vector<PolePair>& poles) {
  std::size_t functions = 0;
  for (const PolePair& pole : poles) functions += pole.functions();
  const auto rows = static_cast<Index>(functions);
  const auto columns = static_cast<Index>(nodes.size());
  Tables tables{std::move(nodes), MatrixXd(rows, columns), MatrixXd(rows, columns)};
  VectorXcd values(rows);
  for (Index n = 0; n < columns; ++n) {
    const double frequency = tables.nodes[static_cast<std::size_t>(n)].frequency;
    evaluate_basis(poles, frequency, std::span(values.data(), functions));
    tables.real.col(n) = values.real();
    tables.imag.col(n) = values.imag();
  }
  tables_ = std::make_shared<const Tables>(std::move(tables));
}

// I - W - B B, its lower half.
MatrixXd NehariForm::Tables::form(int section, double loss_db) const {
  const Discs discs = discs_at(nodes, loss_db);
  const VectorXd root = discs.outside.cwiseSqrt();
  MatrixXd weighted(section, 2 * real.cols());
  weighted << real.topRows(section) * root.asDiagonal(), imag.topRows(section) * root.asDiagonal();
  MatrixXd form = MatrixXd::Identity(section, section);
  form.selfadjointView<Eigen::Lower>().rankUpdate(weighted, -1);
  form.selfadjointView<Eigen::Lower>().rankUpdate(hankel(section, discs.centre), -1);
  return form;
}

// B: the real part of the integral of k v_i v_j.
MatrixXd NehariForm::Tables::hankel(int section, const VectorXcd& centre) const {
  const auto re = real.topRows(section);
  const auto im = imag.topRows(section);
  const VectorXd kr = centre.real();
  const VectorXd ki = centre.imag();
  MatrixXd pushed(section, 2 * real.cols());
  MatrixXd plain(section, 2 * real.cols());
  pushed << re * kr.asDiagonal() - im * ki.asDiagonal(),
      -(re * ki.asDiagonal()) - im * kr.asDiagonal();
  plain << re, im;
  MatrixXd hankel = MatrixXd::Zero(section, section);
  hankel.triangularView<Eigen::Lower>() = pushed * plain.transpose();
  return hankel.selfadjointView<Eigen::Lower>();
}

// The form at one v; `field` is v's function at the nodes.
double NehariForm::Tables::value(const VectorXd& v, const VectorXcd& field, double loss_db) const {
  const Discs discs = discs_at(nodes, loss_db);
  const VectorXcd pushed = discs.centre.cwiseProduct(field);
  const VectorXd projected =
      real.topRows(v.size()) * pushed.real() - imag.topRows(v.size()) * pushed.imag();
  return v.squaredNorm() - discs.outside.dot(field.cwiseAbs2()) - projected.squaredNorm();
}

// Down from `from_db`, which v proves out of reach, to where it just does.
double NehariForm::Tables::lowest_for(const VectorXd& v, double from_db) const {
  VectorXcd field(real.cols());
  field.real() = real.topRows(v.size()).transpose() * v;
  field.imag() = imag.topRows(v.size()).transpose() * v;
  double proved = from_db;
  double open = 0;
  while (proved - open > 0.1 * kStepShare * proved) {
    const double middle = (proved + open) / 2;
    (value(v, field, middle) < -kRounding ? proved : open) = middle;
  }
  return proved;
}

double NehariForm::lowest_unreachable_db(int section, double from_db) const {
  double proved = from_db;
  for (int step = 0; step < kMostSteps; ++step) {
    // The v that breaks the inequality most at one return loss breaks it at lower ones too; the
    // lowest of these is the next to start from. As for a Rayleigh quotient, few steps are needed.
    const Eigen::SelfAdjointEigenSolver<MatrixXd> solver(tables_->form(section, proved));
    if (!(solver.eigenvalues()[0] < -kRounding)) break;
    const double next = tables_->lowest_for(solver.eigenvectors().col(0), proved);
    const bool settled = proved - next <= kStepShare * proved;
    proved = next;
    if (settled) break;
  }
  return proved;
}

}  // namespace bandwright
