// The option line of a Touchstone text: "# <unit> <parameter> <format> R <ohm>...".
#pragma once

#include <vector>

#include "solver/rf/touchstone_text.h"

namespace bandwright {

enum class NetworkParameter { s, y, z, h, g };
// H and G, which only 2-ports have.
inline bool is_hybrid(NetworkParameter p) {
  return p == NetworkParameter::h || p == NetworkParameter::g;
}

enum class NumberFormat { decibel_angle, magnitude_angle, real_imaginary };

// The defaults are those of the specification: a bare "#" means "# GHz S MA R 50".
struct TouchstoneOptions {
  int unit_exponent = 9;  // of ten: 9 for GHz
  NetworkParameter parameter = NetworkParameter::s;
  NumberFormat format = NumberFormat::magnitude_angle;
  std::vector<double> reference_ohm{50.0};  // one, or (version 1.1) one for each port
  int line = 0;
};

bool is_option_line(const TextLine& line);

// Reads an option line. Items may stand in any order, save that the figures follow R and, where
// there are several, end the line. What is faulty keeps its default.
TouchstoneOptions parse_option_line(const TextLine& line, FaultList& faults);

}  // namespace bandwright
