// The wire names of what belongs to an element kind.
#pragma once

#include <array>
#include <span>
#include <string_view>

#include "server/api/decode_node.h"
#include "solver/rf/topology.h"

namespace bandwright {

struct KindNames {
  Kind kind;
  std::string_view value;      // "inductance_h"
  std::string_view tolerance;  // "tolerance_h": the absolute one
  AllowedRange values;         // what an element value may be
};

// One entry a kind, in the order of the enumeration.
inline constexpr std::array<KindNames, 3> kKindNames{{
    {Kind::inductor, "inductance_h", "tolerance_h", kInductanceH},
    {Kind::capacitor, "capacitance_f", "tolerance_f", kCapacitanceF},
    {Kind::resistor, "resistance_ohm", "tolerance_ohm", kResistanceOhm},
}};

inline const KindNames& names_of(Kind kind) {
  return kKindNames[static_cast<std::size_t>(kind)];
}

// "inductor", "capacitor", "resistor".
inline std::array<std::string_view, kKindNames.size()> kind_words() {
  std::array<std::string_view, kKindNames.size()> words;
  for (std::size_t i = 0; i < words.size(); ++i) words[i] = kind_name(kKindNames[i].kind);
  return words;
}

}  // namespace bandwright
