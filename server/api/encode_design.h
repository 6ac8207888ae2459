// Designs as JSON, with the member names of the interface document.
//
// Numbers are plain SI and written so that they read back to the same double. A figure that is not
// finite is a fault of the engine: it throws std::logic_error rather than be shown.
#pragma once

#include <string>

#include "server/api/json.h"
#include "solver/rf/problem.h"
#include "solver/solver/report.h"

namespace bandwright {

// The network of `values`, element by element from the source to the load.
OrderedJson network_json(const Topology& topology, const Values& values);

// Everything known of a design but its rank. `problem` gives the goals and load names.
OrderedJson design_json(const Design& design, const Problem& problem);

// "shunt inductor 15 nH, series capacitor 20 pF", from a network as network_json() wrote it.
std::string network_sentence(const OrderedJson& network);

}  // namespace bandwright
