// The request's "goals", and whether the data covers them.
#pragma once

#include <optional>
#include <vector>

#include "server/api/decode_node.h"
#include "solver/rf/problem.h"

namespace bandwright {

// Nothing if any goal is at fault.
std::optional<std::vector<Goal>> decode_goals(const Node& request);

// Faults for band edges that the loads or the source are not known at, and for edges at which the
// source has no resistance. Either may be unknown.
bool check_goals_covered(const Node& request, const std::vector<Goal>& goals,
                         const std::optional<OnePort>& source,
                         const std::optional<std::vector<LoadState>>& loads);

}  // namespace bandwright
