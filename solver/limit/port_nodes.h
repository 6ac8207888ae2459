// A port read at the quadrature nodes of the bands.
#pragma once

#include <optional>
#include <vector>

#include "solver/limit/band_grid.h"
#include "solver/limit/nehari_form.h"

namespace bandwright {

// A port, or the mirror image of one: the same resistance and the opposite reactance.
struct PortView {
  const OnePort& port;
  bool conjugate = false;
};

// Nodes of all `bands` in units of `unit_hz`. Nothing if the port takes in no power at some node.
std::optional<std::vector<LoadNode>> port_nodes(const PortView& view,
                                                const std::vector<SpacedBand>& bands,
                                                double unit_hz);

}  // namespace bandwright
