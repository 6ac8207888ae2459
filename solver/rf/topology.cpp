#include "solver/rf/topology.h"

#include <algorithm>

namespace bandwright {

std::string_view place_name(Place place) {
  return place == Place::series ? "series" : "shunt";
}

std::string_view kind_name(Kind kind) {
  switch (kind) {
    case Kind::inductor:
      return "inductor";
    case Kind::capacitor:
      return "capacitor";
    case Kind::resistor:
      break;
  }
  return "resistor";
}

Unit kind_unit(Kind kind) {
  switch (kind) {
    case Kind::inductor:
      return Unit::henry;
    case Kind::capacitor:
      return Unit::farad;
    case Kind::resistor:
      break;
  }
  return Unit::ohm;
}

std::string Topology::describe() const {
  std::string text;
  for (const Slot& slot : slots) {
    if (!text.empty()) text += ", ";
    text += std::string(place_name(slot.place)) + " " + std::string(kind_name(slot.kind));
  }
  return text;
}

int Topology::free_count() const {
  return static_cast<int>(
      std::count_if(slots.begin(), slots.end(), [](const Slot& slot) { return !slot.fixed(); }));
}

bool Topology::lossless() const {
  return std::all_of(slots.begin(), slots.end(), [](const Slot& slot) {
    return slot.kind != Kind::resistor && slot.part.lossless();
  });
}

}  // namespace bandwright
