// The "network" of an analysis: elements with their values, in the form answers have.
#pragma once

#include <optional>

#include "server/api/decode_node.h"
#include "server/api/decode_part.h"
#include "solver/rf/topology.h"

namespace bandwright {

struct FixedNetwork {
  Topology topology;
  Values values;
};

// Nothing if any element is at fault. An element may hold the members "label" and its tolerance,
// so that the network of an answer can be sent back as it is.
std::optional<FixedNetwork> decode_network(const Node& request, const PartTable& parts);

}  // namespace bandwright
