// What a network does at one frequency, evaluated plainly: the reference for the fast kernel and
// the figures of a report.
#pragma once

#include <vector>

#include "solver/rf/one_port.h"
#include "solver/rf/topology.h"

namespace bandwright {

struct PortResponse {
  // Power-wave reflection at the source, (Zin - conj Zs) / (Zin + Zs).
  Complex reflection;
  // Power into the load over power available from the source, 0 to 1 for passive networks.
  double transducer_gain = 0;
  // Power into the load over power into the network, 0 to 1.
  double efficiency = 0;
};

PortResponse respond(const Topology& topology, const Values& values, const OnePort& source,
                     const OnePort& load, double frequency_hz);

// Peak voltage across and peak current through one element, and the power it turns to heat.
struct ElementState {
  Complex voltage_v;
  Complex current_a;
  double dissipated_w = 0;
};

struct DrivenState {
  std::vector<ElementState> elements;
  double load_w = 0;      // power into the load
  double accepted_w = 0;  // power into the network
};

// The network driven by a source with `available_w` of available power.
DrivenState drive(const Topology& topology, const Values& values, const OnePort& source,
                  const OnePort& load, double frequency_hz, double available_w);

}  // namespace bandwright
