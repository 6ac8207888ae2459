// From the numbers of one frequency to one matrix, and from all matrices to scattering data.
#pragma once

#include <span>
#include <vector>

#include "solver/rf/touchstone_options.h"

namespace bandwright {

inline constexpr int kMostPorts = 16;
inline constexpr std::size_t kMostPoints = 10'000;

// The order in which a text lists the entries of a matrix.
enum class Arrangement {
  rows,     // N11 N12 ... N21 N22 ...
  columns,  // N11 N21 N12 N22, the old order of 2-ports
  lower,    // N11, N21 N22, ...: the lower triangle of a symmetric matrix
  upper     // N11 N12 ..., N22 ...: its upper triangle
};

// The numbers of one frequency in `arrangement`, the frequency among them.
std::size_t numbers_a_point(int ports, Arrangement arrangement);

// Gathers the points of a text; the matrices are as the text has them, row by row.
class PointList {
 public:
  PointList(int ports, Arrangement arrangement, const TouchstoneOptions& options, FaultList& faults)
      : ports_(ports), arrangement_(arrangement), options_(options), faults_(faults) {}

  // Adds one point. `numbers` holds numbers_a_point() of them, the frequency first.
  void add(std::span<const NumberWord> numbers);

  std::size_t size() const { return frequency_hz_.size(); }
  double last_hz() const { return last_hz_; }

  // The whole as scattering data at `reference_ohm`, one a port. `normalised` says that Y, Z, H and
  // G values are relative to the reference, as in version 1 texts. Faults go to the list.
  NetworkData scattering(std::vector<double> reference_ohm, bool normalised);

 private:
  Complex entry(const NumberWord& first, const NumberWord& second);

  int ports_;
  Arrangement arrangement_;
  TouchstoneOptions options_;
  FaultList& faults_;
  std::vector<double> frequency_hz_;
  std::vector<int> lines_;
  std::vector<Complex> matrices_;
  double last_hz_ = -1;
};

// The frequency that `word` gives in the unit of `options`, Hz; NaN, with a fault unless `word` is
// one already, if it is negative or out of range.
double frequency_of(const NumberWord& word, const TouchstoneOptions& options, FaultList& faults);

// Checks that `next_hz` follows `last_hz`, with a fault at `line` if not; NaN passes.
void check_increasing(double last_hz, double next_hz, int line, FaultList& faults);

}  // namespace bandwright
