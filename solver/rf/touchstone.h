// Reader for Touchstone network data (IBIS Open Forum, versions 1.0, 1.1, 2.0 and 2.1).
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

#include "solver/base/result.h"
#include "solver/rf/immittance.h"

namespace bandwright {

// Scattering data of an N-port, whatever parameter the text held.
struct NetworkData {
  int ports = 0;
  std::vector<double> frequency_hz;   // F values, strictly increasing
  std::vector<double> reference_ohm;  // `ports` values
  // F * ports * ports values; S(row, column) of point k is at (k * ports + row) * ports + column.
  std::vector<Complex> scattering;

  Complex s(std::size_t point, int row, int column) const {
    return scattering[(point * ports + row) * ports + column];
  }
};

// One thing wrong with a text. `line` counts from 1; 0 means the text as a whole.
struct TextFault {
  int line = 0;
  std::string message;
};

// Reads `text`. `ports` is what the caller knows of the port count, 0 for "find out" (version 1
// texts do not say it). All faults are returned, at most `max_faults` of them.
Result<NetworkData, std::vector<TextFault>> parse_touchstone(std::string_view text, int ports = 0,
                                                             std::size_t max_faults = 20);

}  // namespace bandwright
