// Loads and sources: a Touchstone text, samples, an equivalent circuit, or a plain impedance.
#pragma once

#include <optional>
#include <vector>

#include "server/api/decode_node.h"
#include "solver/rf/problem.h"

namespace bandwright {

enum class PortRole { source, load };

// One one-port. `named`: the object may also hold the member "name", which is not read here.
std::optional<OnePort> decode_one_port(const Node& node, PortRole role, bool named);

// The request's "source"; 50 ohm if it has none.
std::optional<OnePort> decode_source(const Node& request);

// The request's "load" or "loads". Nothing if any of them is at fault.
std::optional<std::vector<LoadState>> decode_loads(const Node& request);

// Faults of `node`, a frequency of the request, if `port` (called `noun`, "the load") is not known
// at `frequency_hz`.
bool check_covered(const Node& node, double frequency_hz, const OnePort& port,
                   const std::string& noun);

}  // namespace bandwright
