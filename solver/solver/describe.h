// Everything known of one network with values: goals, yield, sensitivity, stress, response.
#pragma once

#include "solver/solver/report.h"
#include "solver/solver/solver.h"

namespace bandwright {

// Boards come in numbered batches: one to choose on, one to judge on.
inline constexpr std::uint64_t kChoosingBatch = 0;
inline constexpr std::uint64_t kJudgingBatch = 1;

// True if some goal can be missed; only then is there a yield.
bool has_bounds(const std::vector<Goal>& goals);

// Worst values of every goal, checked between the samples, and the least margin.
void describe_goals(const Problem& problem, Design& design);

// A full description of `topology` with `values`, the response over `sweep`.
Design describe(const Problem& problem, const Topology& topology, const Values& values,
                const SweepRange& sweep, int threads);

// The worst return loss of the bare load over all return-loss bands (or all bands).
Unmatched describe_unmatched(const Problem& problem);

}  // namespace bandwright
