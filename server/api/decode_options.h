// The parts of a request that say how, not what: name, tolerance, search, budget, drive, ranking.
//
// A member at fault leaves its default in place; the fault itself keeps the request from being
// taken.
#pragma once

#include <string>

#include "server/api/decode_node.h"
#include "solver/rf/problem.h"

namespace bandwright {

std::string decode_name(const Node& request);
ToleranceRequest decode_tolerance_request(const Node& request);
SearchRequest decode_search(const Node& request);
// "search" of an analysis, which only draws random numbers: its seed.
std::uint64_t decode_analysis_seed(const Node& request);
double decode_run_seconds(const Node& request);
double decode_drive_w(const Node& request);
RankBy decode_rank_by(const Node& request);

}  // namespace bandwright
