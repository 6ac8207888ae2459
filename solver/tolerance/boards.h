// Boards as they come off the line: every part's value drawn from its tolerance.
//
// The draw for element e of board b is a function of (seed, b, e) alone, so all designs of one run
// see the same boards (common random numbers) and threads change nothing.
#pragma once

#include <cstdint>

#include "solver/base/random.h"
#include "solver/rf/problem.h"

namespace bandwright {

class Boards {
 public:
  // `batch` numbers independent sets of boards of one seed: what is chosen on one batch is judged
  // on another.
  Boards(const Topology& topology, const Values& nominal, Distribution distribution,
         std::uint64_t seed, std::uint64_t batch);

  // The deviation of one element, in units of its half-width: uniform on [-1, 1), or normal with a
  // standard deviation of one third.
  double deviation(std::uint64_t board, int element) const {
    const std::uint64_t index = board * kElementsMax + static_cast<std::uint64_t>(element);
    return distribution_ == Distribution::uniform ? random_.symmetric(index)
                                                  : random_.normal(index) / 3;
  }
  // Where that deviation stands in its distribution, from 0 to 1.
  double deviation_share(std::uint64_t board, int element) const {
    return random_.uniform(board * kElementsMax + static_cast<std::uint64_t>(element));
  }
  // Fills one value for each element. A value never falls below a thousandth of its nominal.
  void draw(std::uint64_t board, double* values) const;

 private:
  static constexpr std::uint64_t kElementsMax = 64;

  Values nominal_;
  std::vector<double> half_width_;
  Distribution distribution_;
  RandomStream random_;
};

}  // namespace bandwright
