// Single-frequency examples of the textbooks and the figures of return loss.

#include <doctest/doctest.h>

#include <cmath>
#include <numbers>

#include "solver/rf/immittance.h"
#include "solver/rf/response.h"

namespace bandwright {
namespace {

using std::numbers::pi;

Slot slot(Place place, Kind kind, Part part = {}) {
  return {place, kind, {1e-15, 1}, part, -1};
}

double reflection(const Topology& topology, const Values& values, Complex load, double source,
                  double hz) {
  return std::abs(
      respond(topology, values, OnePort::constant(source), OnePort::constant(load), hz).reflection);
}

TEST_CASE("return loss, reflection, standing wave ratio and mismatch loss convert as tabulated") {
  // Computed from the definitions.
  struct Row {
    double loss_db, reflection, vswr, reflected_percent, mismatch_db;
  };
  const Row kRows[] = {
      {3, 0.707946, 5.84804, 50.11872, 3.020624},  {6, 0.501187, 3.00952, 25.11886, 1.256276},
      {10, 0.316228, 1.92495, 10.00000, 0.457575}, {12, 0.251189, 1.67090, 6.30957, 0.283048},
      {14, 0.199526, 1.49852, 3.98107, 0.176431},  {15, 0.177828, 1.43258, 3.16228, 0.139554},
      {20, 0.100000, 1.22222, 1.00000, 0.043648},  {26, 0.050119, 1.10553, 0.25119, 0.010923},
      {30, 0.031623, 1.06531, 0.10000, 0.004345}};
  for (const Row& row : kRows) {
    const double found = reflection_from_return_loss_db(row.loss_db);
    CHECK(std::abs(found - row.reflection) < 6e-7);
    CHECK(return_loss_db(found) == doctest::Approx(row.loss_db).epsilon(1e-13));
    CHECK(std::abs(vswr(found) - row.vswr) < 6e-6);
    CHECK(std::abs(100 * found * found - row.reflected_percent) < 6e-6);
    CHECK(std::abs(mismatch_loss_db(found) - row.mismatch_db) < 6e-7);
  }
  // A ratio of 1.5 is 13.9794 dB, 2 is 9.5424 dB, 3 is 6.0206 dB.
  CHECK(std::abs(return_loss_db(0.5 / 2.5) - 13.9794) < 5e-5);
  CHECK(std::abs(return_loss_db(1.0 / 3) - 9.5424) < 5e-5);
  CHECK(std::abs(return_loss_db(0.5) - 6.0206) < 5e-5);
}

TEST_CASE("a perfect match has a finite return loss") {
  CHECK(return_loss_db(0) == kPerfectReturnLossDb);
  CHECK(return_loss_db(1e-300) == kPerfectReturnLossDb);
  CHECK(return_loss_db(std::nan("")) == kPerfectReturnLossDb);
}

TEST_CASE("impedance, admittance and reflection convert into each other") {
  for (const Complex z : {Complex(20, -35), Complex(200, 1), Complex(1, 700)}) {
    const Complex s = reflection_from_impedance(z, 75);
    CHECK(std::abs(impedance_from_reflection(s, 75) - z) < 1e-11 * std::abs(z));
    CHECK(std::abs(reflection_from_admittance(1.0 / z, 75) - s) < 1e-14);
    CHECK(std::abs(admittance_from_reflection(s, 75) - 1.0 / z) < 1e-12);
    CHECK(std::abs(power_wave_reflection(z, std::conj(z))) < 1e-15);
    CHECK(std::abs(power_wave_reflection(z, 75) - s) < 1e-14);
  }
}

TEST_CASE("both L-sections of the textbook example match") {
  // Pozar, Microwave Engineering, example 5.1: 200 - j100 ohm to 100 ohm at 500 MHz. Exact values
  // computed from the closed form; the printed, rounded ones from memory: 0.92 pF and 38.8 nH,
  // 46.1 nH and 2.61 pF.
  const Complex load(200, -100);
  const Topology low{{slot(Place::series, Kind::inductor), slot(Place::shunt, Kind::capacitor)}};
  const Topology high{{slot(Place::series, Kind::capacitor), slot(Place::shunt, Kind::inductor)}};
  CHECK(reflection(low, {38.984840e-9, 0.922774e-12}, load, 100, 500e6) < 1e-6);
  CHECK(reflection(high, {2.598989e-12, 46.138692e-9}, load, 100, 500e6) < 1e-6);
  CHECK(reflection(low, {38.8e-9, 0.92e-12}, load, 100, 500e6) < 0.01);
}

TEST_CASE("L-sections by closed form match any load with more resistance than the source") {
  // Pozar, section 5.1: B = (X +- sqrt(R/Z0) sqrt(R^2 + X^2 - Z0 R)) / (R^2 + X^2),
  // X1 = 1/B + X Z0/R - Z0/(B R). Formula from memory.
  constexpr double kHz = 1e9, kZ0 = 50;
  const double omega = 2 * pi * kHz;
  for (const Complex load : {Complex(75, 30), Complex(300, -40), Complex(60, 500)}) {
    const double r = load.real(), x = load.imag();
    for (const double sign : {1.0, -1.0}) {
      const double b =
          (x + sign * std::sqrt(r / kZ0) * std::sqrt(std::norm(load) - kZ0 * r)) / std::norm(load);
      const double series = 1 / b + x * kZ0 / r - kZ0 / (b * r);
      const Topology topology{{slot(Place::series, series > 0 ? Kind::inductor : Kind::capacitor),
                               slot(Place::shunt, b > 0 ? Kind::capacitor : Kind::inductor)}};
      const Values values{series > 0 ? series / omega : -1 / (omega * series),
                          b > 0 ? b / omega : -1 / (omega * b)};
      CHECK(reflection(topology, values, load, kZ0, kHz) < 1e-12);
    }
  }
}

TEST_CASE("the Bode-Fano limits of single reactances have their closed-form values") {
  // Bode (1945); Fano, J. Franklin Inst. 249 (1950). exp(-1 / (2 B R C)) with B in Hz. The values
  // stand here to pin the constant: a slip of two is the common error.
  const auto parallel_rc = [](double hz, double ohm, double farad) {
    return std::exp(-1 / (2 * hz * ohm * farad));
  };
  CHECK(return_loss_db(parallel_rc(1e9, 50, 10e-12)) == doctest::Approx(8.685889638).epsilon(1e-9));
  // The best match with one added reactance stays above the limit for the same load: decrement
  // 1/(omega R C) = 1/pi over 0 to 1 GHz.
  const double decrement = 1 / (2 * pi * 1e9 * 50 * 10e-12);
  const double root = std::sqrt(1 + decrement * decrement) - decrement;
  CHECK(root * root > parallel_rc(1e9, 50, 10e-12));
}

TEST_CASE("a lossy L-match has the efficiency of its closed form") {
  // 5 to 50 ohm, series inductor with Q 30 and matched with its loss: X = 15.672383 ohm,
  // efficiency R/(R + X/Q) = 0.9054014. Computed from the formula.
  constexpr double kHz = 100e6, kX = 15.672383;
  const double omega = 2 * pi * kHz;
  Part lossy;
  lossy.q = QualityFactor{30, kHz, 0};
  const double resistance = 5 + kX / 30;
  const double b = kX / (resistance * resistance + kX * kX);
  const Topology topology{
      {slot(Place::shunt, Kind::capacitor), slot(Place::series, Kind::inductor, lossy)}};
  const PortResponse response =
      respond(topology, {b / omega, kX / omega}, OnePort::constant(50), OnePort::constant(5), kHz);
  CHECK(std::abs(response.reflection) < 1e-6);
  CHECK(std::abs(response.efficiency - 0.9054014) < 1e-7);
  CHECK(std::abs(response.transducer_gain - 0.9054014) < 1e-7);
}

}  // namespace
}  // namespace bandwright
