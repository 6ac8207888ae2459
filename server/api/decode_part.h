// What can be bought: the request's "parts", and an element's own "part".
#pragma once

#include <array>
#include <optional>

#include "server/api/decode_node.h"
#include "server/api/kind_names.h"
#include "solver/rf/part.h"

namespace bandwright {

// A part and which of its members somebody chose. The others are defaults, to be listed if used.
struct PartDraft {
  Part part;
  bool values_given = false;
  bool tolerance_given = false;
  bool loss_given = false;
  bool parasitic_given = false;
};

using PartTable = std::array<PartDraft, kKindNames.size()>;  // in the order of Kind

// The request's "parts"; faults are told, and the defaults stand in for what is at fault.
PartTable decode_parts(const Node& request);

// Overlays what `node`, one part of `kind`, says.
void decode_part(const Node& node, Kind kind, PartDraft& draft);

// "tolerance_percent" or the absolute tolerance of `kind`, read from `node`'s members.
void decode_tolerance(const Node& node, Kind kind, PartDraft& draft);

// Lists the defaults in use for a part of `kind`. A part that is only used at fixed values takes
// none of its offered values.
void note_part_defaults(const PartDraft& draft, Kind kind, bool open_value, DecodeContext& context);

// An open element needs a value to choose: false and a fault at `node` if the part offers none in
// [min, max].
bool check_offered(const Node& node, const Part& part, Kind kind, double min, double max);

}  // namespace bandwright
