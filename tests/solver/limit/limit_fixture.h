// Loads for the tests of the limit, in a line each.
#pragma once

#include <cmath>
#include <fstream>
#include <iterator>
#include <numbers>
#include <stdexcept>
#include <string>
#include <vector>

#include "solver/limit/limit.h"
#include "solver/rf/touchstone.h"

namespace bandwright::limit_fixture {

inline constexpr double kPerRadian = 1 / (2 * std::numbers::pi);  // Hz for 1 rad/s

inline Circuit resistor(double ohm) {
  return {Circuit::Type::resistor, ohm, {}};
}
inline Circuit inductor(double henry) {
  return {Circuit::Type::inductor, henry, {}};
}
inline Circuit capacitor(double farad) {
  return {Circuit::Type::capacitor, farad, {}};
}
inline Circuit series(std::vector<Circuit> parts) {
  return {Circuit::Type::series, 0, std::move(parts)};
}
inline Circuit parallel(std::vector<Circuit> parts) {
  return {Circuit::Type::parallel, 0, std::move(parts)};
}

inline MatchLimit limit_of(const OnePort& load, const std::vector<BandRange>& bands,
                           int refinements = kLimitRefinements) {
  return match_limit(OnePort::constant(50), load, bands, {refinements, 0});
}
inline MatchLimit limit_of(const Circuit& load, const std::vector<BandRange>& bands,
                           int refinements = kLimitRefinements) {
  return limit_of(OnePort::from_circuit(load), bands, refinements);
}

// A load from tests/data/loads.
inline OnePort sampled_load(const std::string& name) {
  std::ifstream file(std::string(BANDWRIGHT_SOURCE_DIR) + "/tests/data/loads/" + name);
  const std::string text{std::istreambuf_iterator<char>(file), {}};
  const auto data = parse_touchstone(text, 1);
  if (!data) throw std::runtime_error("cannot read " + name);
  return OnePort::from_reflection(data->frequency_hz, data->scattering, data->reference_ohm[0]);
}

// `circuit` as a table of `count` samples from `from_hz` to `to_hz`.
inline OnePort sampled(const Circuit& circuit, double from_hz, double to_hz, int count) {
  std::vector<double> frequency_hz;
  std::vector<Complex> reflection;
  for (int i = 0; i < count; ++i) {
    frequency_hz.push_back(from_hz + (to_hz - from_hz) * i / (count - 1));
    reflection.push_back(circuit.wave(frequency_hz.back()).reflection(50));
  }
  return OnePort::from_reflection(frequency_hz, reflection, 50);
}

}  // namespace bandwright::limit_fixture
