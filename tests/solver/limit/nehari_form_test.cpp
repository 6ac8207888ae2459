#include "solver/limit/nehari_form.h"

#include <doctest/doctest.h>

#include <cmath>

#include "solver/limit/port_nodes.h"

namespace bandwright {
namespace {

// Repeated poles at -1 give the powers of z = (1 - s)/(1 + s): the classical Hankel section.
std::vector<PolePair> powers(int count) {
  return std::vector<PolePair>(static_cast<std::size_t>(count), PolePair{1, 0});
}

// A load of resistance 1 over the band 0..1 rad/s, read densely enough for high powers of z.
std::vector<LoadNode> low_pass_nodes(double inductor, double capacitor) {
  std::vector<double> panel_ends_hz;
  for (int i = 1; i < 64; ++i) panel_ends_hz.push_back(i / 64.0);
  std::vector<LoadNode> nodes;
  for (const QuadratureNode& node : band_nodes(spaced_bands({{0, 1}}).front(), panel_ends_hz)) {
    const double w = node.frequency_hz;
    const Complex z = Complex(0, inductor * w) + 1.0 / Complex(1, capacitor * w);
    const Complex s = reflection_from_impedance(z, 1);
    nodes.push_back({w, node.weight_hz, s, 1 - std::norm(s)});
  }
  return nodes;
}

TEST_CASE("on powers of z the form gives the finite-section floors computed with Fourier series") {
  // Floors computed for this project with Fourier coefficients of the discs (65,536 points or
  // more), as the smallest eigenvalue of a Toeplitz matrix less a squared Hankel matrix.
  struct Row {
    double inductor, capacitor;
    int section;
    double floor;
  };
  for (const Row& row :
       {Row{2.3, 1.2, 50, 0.254898}, Row{2.3, 1.2, 100, 0.266088}, Row{2.3, 1.2, 200, 0.272205},
        Row{0, 2, 50, 0.200265}, Row{0, 2, 200, 0.205782}, Row{1, 3, 50, 0.357367},
        Row{1, 3, 200, 0.382737}}) {
    const NehariForm form(low_pass_nodes(row.inductor, row.capacitor), powers(row.section));
    const double loss_db = form.lowest_unreachable_db(row.section, 100);
    CHECK(std::abs(reflection_from_return_loss_db(loss_db) - row.floor) < 3e-6);
  }
}

TEST_CASE("a section that proves nothing returns where it started") {
  const NehariForm form(low_pass_nodes(0, 2), powers(20));
  CHECK(form.lowest_unreachable_db(20, 5) == 5);
  const double limit_db = form.lowest_unreachable_db(20, 60);
  CHECK(limit_db < 60);
  CHECK(form.lowest_unreachable_db(20, limit_db - 0.01) == limit_db - 0.01);
}

TEST_CASE("a port that takes in no power somewhere in the band has no nodes to test") {
  const auto bands = spaced_bands({{1e6, 2e6}});
  const OnePort coil = OnePort::from_circuit({Circuit::Type::inductor, 1e-6, {}});
  CHECK_FALSE(port_nodes({coil}, bands, 2e6));
  CHECK(port_nodes({OnePort::constant({50, 20})}, bands, 2e6));
}

TEST_CASE("the mirror image of a port has the conjugate reflection") {
  const OnePort port = OnePort::constant({20, 30});
  const auto bands = spaced_bands({{1e6, 2e6}});
  const auto plain = port_nodes({port, false}, bands, 2e6);
  const auto mirrored = port_nodes({port, true}, bands, 2e6);
  REQUIRE(plain);
  REQUIRE(mirrored);
  CHECK((*plain)[5].reflection == std::conj((*mirrored)[5].reflection));
  CHECK((*plain)[5].absorbed == (*mirrored)[5].absorbed);
}

}  // namespace
}  // namespace bandwright
