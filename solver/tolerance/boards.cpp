#include "solver/tolerance/boards.h"

#include <algorithm>

namespace bandwright {
namespace {

constexpr double kLeastShare = 1e-3;

}  // namespace

Boards::Boards(const Topology& topology, const Values& nominal, Distribution distribution,
               std::uint64_t seed, std::uint64_t batch)
    : nominal_(nominal), distribution_(distribution), random_(seed, 0xB0A2D5 + batch) {
  for (std::size_t i = 0; i < nominal.size(); ++i) {
    half_width_.push_back(topology.slots[i].part.tolerance.half_width(nominal[i]));
  }
}

void Boards::draw(std::uint64_t board, double* values) const {
  for (std::size_t i = 0; i < nominal_.size(); ++i) {
    const double value = nominal_[i] + half_width_[i] * deviation(board, static_cast<int>(i));
    values[i] = std::max(value, kLeastShare * nominal_[i]);
  }
}

}  // namespace bandwright
