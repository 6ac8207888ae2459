#include "solver/limit/nehari_form.h"

#include <Eigen/Eigenvalues>
#include <cmath>
#include <numbers>
#include <span>
#include <utility>

namespace bandwright {
namespace {

// A form is counted as negative only below this, well above what rounding does to a sum of some
// thousand terms whose parts are of order 1: doubt goes to the side of the larger return loss.
constexpr double kRounding = 2e-13;
constexpr double kStepShare = 1e-6;  // of the return loss, where the descent ends
constexpr int kMostSteps = 40;

}  // namespace

// The discs of all nodes, times the weight of the integral over 2 pi; that over negative
// frequencies equals that over positive ones and doubles it.
struct NehariForm::Discs {
  Eigen::VectorXd outside;  // 1 - R^2
  Eigen::VectorXcd centre;  // k
};

NehariForm::NehariForm(std::vector<LoadNode> nodes, const std::vector<PolePair>& poles)
    : nodes_(std::move(nodes)) {
  std::size_t functions = 0;
  for (const PolePair& pole : poles) functions += pole.functions();
  const auto columns = static_cast<Eigen::Index>(nodes_.size());
  real_.resize(static_cast<Eigen::Index>(functions), columns);
  imag_.resize(static_cast<Eigen::Index>(functions), columns);
  Eigen::VectorXcd values(static_cast<Eigen::Index>(functions));
  for (Eigen::Index n = 0; n < columns; ++n) {
    const double frequency = nodes_[static_cast<std::size_t>(n)].frequency;
    evaluate_basis(poles, frequency, std::span(values.data(), functions));
    real_.col(n) = values.real();
    imag_.col(n) = values.imag();
  }
}

NehariForm::Discs NehariForm::discs(double loss_db) const {
  const double r = reflection_from_return_loss_db(loss_db);
  const double rest = (1 - r) * (1 + r);
  const auto count = static_cast<Eigen::Index>(nodes_.size());
  Discs discs{Eigen::VectorXd(count), Eigen::VectorXcd(count)};
  for (Eigen::Index n = 0; n < count; ++n) {
    const LoadNode& node = nodes_[static_cast<std::size_t>(n)];
    const double share = node.weight / std::numbers::pi;
    const double below = rest + r * r * node.absorbed;  // 1 - r^2 |S|^2
    const double radius = r * node.absorbed / below;
    discs.outside[n] = share * (1 - radius) * (1 + radius);
    discs.centre[n] = share * rest / below * std::conj(node.reflection);
  }
  return discs;
}

Eigen::MatrixXd NehariForm::form(int section, double loss_db) const {
  const Discs at = discs(loss_db);
  const auto re = real_.topRows(section);
  const auto im = imag_.topRows(section);
  const Eigen::Index n = re.cols();
  Eigen::MatrixXd left(section, 2 * n);
  Eigen::MatrixXd right(section, 2 * n);

  const Eigen::VectorXd root = at.outside.cwiseSqrt();
  left << re * root.asDiagonal(), im * root.asDiagonal();
  Eigen::MatrixXd form = Eigen::MatrixXd::Identity(section, section);
  form.selfadjointView<Eigen::Lower>().rankUpdate(left, -1);

  const Eigen::VectorXd kr = at.centre.real();
  const Eigen::VectorXd ki = at.centre.imag();
  left << re * kr.asDiagonal() - im * ki.asDiagonal(),
      -(re * ki.asDiagonal()) - im * kr.asDiagonal();
  right << re, im;
  Eigen::MatrixXd hankel = Eigen::MatrixXd::Zero(section, section);
  hankel.triangularView<Eigen::Lower>() = left * right.transpose();
  hankel.triangularView<Eigen::StrictlyUpper>() = hankel.transpose();
  form.selfadjointView<Eigen::Lower>().rankUpdate(hankel, -1);
  return form;
}

// The form at one v; `field` is v's function at the nodes.
double NehariForm::value(const Eigen::VectorXd& v, const Eigen::VectorXcd& field,
                         double loss_db) const {
  const Discs at = discs(loss_db);
  const Eigen::VectorXcd pushed = at.centre.cwiseProduct(field);
  const Eigen::VectorXd projected =
      real_.topRows(v.size()) * pushed.real() - imag_.topRows(v.size()) * pushed.imag();
  return v.squaredNorm() - at.outside.dot(field.cwiseAbs2()) - projected.squaredNorm();
}

// Down from `from_db`, which v proves out of reach, to where it just does.
double NehariForm::lowest_for(const Eigen::VectorXd& v, double from_db) const {
  Eigen::VectorXcd field(real_.cols());
  field.real() = real_.topRows(v.size()).transpose() * v;
  field.imag() = imag_.topRows(v.size()).transpose() * v;
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
    const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> solver(form(section, proved));
    if (!(solver.eigenvalues()[0] < -kRounding)) break;
    const double next = lowest_for(solver.eigenvectors().col(0), proved);
    const bool settled = proved - next <= kStepShare * proved;
    proved = next;
    if (settled) break;
  }
  return proved;
}

}  // namespace bandwright
