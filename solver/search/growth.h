// Starts for a topology from the optima of topologies with one element less.
//
// A smaller network with one more element whose value hardly matters is almost the same network, so
// a larger topology can begin where a smaller one ended.
#pragma once

#include <vector>

#include "solver/rf/topology.h"

namespace bandwright {

// The slot's value that changes a network least: the end of its range with the smallest series
// impedance or shunt admittance.
double most_neutral_value(const Slot& slot);

// `topology` without the slot `without`.
Topology one_less(const Topology& topology, int without);

// True if both have the same places, kinds, ranges and parts in the same order.
bool same_slots(const Topology& a, const Topology& b);

// `smaller` values with the most neutral value at slot `inserted` of `topology`.
Values grown(const Topology& topology, int inserted, const Values& smaller);

}  // namespace bandwright
