#include "solver/search/growth.h"

#include <doctest/doctest.h>

#include "tests/solver/problems.h"

using namespace bandwright;
using namespace bandwright::test;

TEST_CASE("the most neutral value is a short in series and an open in shunt") {
  for (Place place : {Place::series, Place::shunt}) {
    for (Kind kind : {Kind::inductor, Kind::capacitor, Kind::resistor}) {
      Slot slot;
      slot.place = place;
      slot.kind = kind;
      slot.range = kind == Kind::inductor    ? ValueRange{1e-13, 1e-3}
                   : kind == Kind::capacitor ? ValueRange{1e-17, 1e-6}
                                             : ValueRange{1e-4, 1e8};
      const double value = most_neutral_value(slot);
      CHECK((value == slot.range.min || value == slot.range.max));
      const bool large = (kind == Kind::capacitor) == (place == Place::series);
      CHECK((value == slot.range.max) == large);
    }
  }
}

TEST_CASE("a ladder without its last element is found among the smaller ladders") {
  const Problem problem = ladder_problem(kWhip, 2, 3, 6);
  int found = 0;
  for (const Topology& larger : problem.topologies) {
    if (larger.slots.size() != 3) continue;
    for (int slot : {0, 2}) {
      const Topology smaller = one_less(larger, slot);
      for (const Topology& other : problem.topologies) found += same_slots(other, smaller);
    }
    const Values values = grown(larger, 1, {1e-9, 2e-9});
    CHECK(values.size() == 3);
    CHECK(values[1] == most_neutral_value(larger.slots[1]));
    CHECK(values[2] == 2e-9);
  }
  CHECK(found == 2 * 16);
}
