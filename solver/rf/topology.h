// A network with open values: what one search works on, and, with values, what a design is.
//
// Slots stand in order from the source to the load. Every slot has one or more values (an inductor
// has one; a series LC branch two); a fixed value has min == max.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "solver/base/quantity.h"
#include "solver/rf/part.h"

namespace bandwright {

enum class Place { series, shunt };
enum class Kind { inductor, capacitor, resistor };

std::string_view place_name(Place place);
std::string_view kind_name(Kind kind);
Unit kind_unit(Kind kind);  // of the first value

struct ValueRange {
  double min = 0;
  double max = 0;
  bool fixed() const { return min == max; }
  bool operator==(const ValueRange&) const = default;
};

struct Slot {
  Place place = Place::series;
  Kind kind = Kind::inductor;
  ValueRange range;
  Part part;
  int template_index = -1;  // the template element it came from; -1 for a ladder rule

  bool fixed() const { return range.fixed(); }
};

struct Topology {
  std::vector<Slot> slots;

  // "shunt inductor, series capacitor", from the source to the load.
  std::string describe() const;
  // Slots whose value is open.
  int free_count() const;
  bool lossless() const;
};

// A design's network: one value for each slot.
using Values = std::vector<double>;

}  // namespace bandwright
