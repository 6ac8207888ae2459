// The request's "template": elements with freedom, or the ladder rule.
#pragma once

#include <optional>

#include "server/api/decode_node.h"
#include "server/api/decode_part.h"
#include "solver/rf/template.h"

namespace bandwright {

// Where default value ranges are taken; unknown while goals or source are at fault.
struct RangeBasis {
  double centre_hz = 0;
  double source_ohm = 0;
};

// Nothing if the template is at fault; every fault is told. Without a basis only what does not
// depend on it is checked, and nothing is returned.
std::optional<Template> decode_template(const Node& request, const PartTable& parts,
                                        const std::optional<RangeBasis>& basis);

// The topologies of `form`; a fault at the template if there is none or too many.
std::optional<std::vector<Topology>> expand_template(const Node& request, const Template& form,
                                                     const RangeBasis& basis);

// "series" or "shunt", from the member "place".
std::optional<Place> decode_place(const Node& element);

// The part of one kind at one element: what `parts` says, overlaid by the element's own "part".
// Where an element has several kinds, its "part" may hold one part a kind, as "parts" does.
PartDraft element_part(const Node& element, Kind kind, bool several_kinds, const PartTable& parts);

}  // namespace bandwright
