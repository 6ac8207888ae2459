#include "solver/search/growth.h"

#include <algorithm>

namespace bandwright {

double most_neutral_value(const Slot& slot) {
  // A small inductance or resistance is a short circuit, a small capacitance an open one.
  const bool small_is_short = slot.kind != Kind::capacitor;
  const bool wants_short = slot.place == Place::series;
  return small_is_short == wants_short ? slot.range.min : slot.range.max;
}

Topology one_less(const Topology& topology, int without) {
  Topology out = topology;
  out.slots.erase(out.slots.begin() + without);
  return out;
}

bool same_slots(const Topology& a, const Topology& b) {
  return std::equal(a.slots.begin(), a.slots.end(), b.slots.begin(), b.slots.end(),
                    [](const Slot& x, const Slot& y) {
                      return x.place == y.place && x.kind == y.kind && x.range == y.range &&
                             x.part == y.part;
                    });
}

Values grown(const Topology& topology, int inserted, const Values& smaller) {
  Values out = smaller;
  out.insert(out.begin() + inserted, most_neutral_value(topology.slots[inserted]));
  return out;
}

}  // namespace bandwright
