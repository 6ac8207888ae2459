// The physical limit of a whole problem: what no network could beat in its goals' bands.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "solver/limit/limit.h"
#include "solver/rf/problem.h"

namespace bandwright {

// The bands in which something is to be matched (return loss or gain at least, or as good as
// possible); each load state by itself bounds a network that must serve them all, so the smallest
// of their limits is reported. Nothing if no goal asks for a match, or only at single frequencies,
// where any load can be matched.
std::optional<MatchLimit> problem_limit(const Problem& problem, int threads);

// One sentence for each goal that no lossless network (return loss) or no passive network (gain)
// of any size can meet, with by how much.
std::vector<std::string> limit_warnings(const Problem& problem, const MatchLimit& limit);

}  // namespace bandwright
