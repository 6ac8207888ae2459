// A template: elements with freedom, or the ladder rule, and its expansion to distinct topologies.
#pragma once

#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "solver/base/result.h"
#include "solver/rf/topology.h"

namespace bandwright {

// What the template says of one kind at one place. No range: the default range.
struct KindChoice {
  Kind kind = Kind::inductor;
  std::optional<ValueRange> range;
  Part part;
};

struct TemplateElement {
  Place place = Place::series;
  std::vector<KindChoice> choices;
  bool optional = false;
};

// Every alternating series/shunt ladder of min to max elements of the given kinds.
struct LadderRule {
  int min_elements = 1;
  int max_elements = 3;
  std::vector<KindChoice> choices;
};

using Template = std::variant<std::vector<TemplateElement>, LadderRule>;

// The default range of a kind: every value whose reactance (resistance) at `centre_hz` lies
// between 1/50 and 50 times `source_ohm`.
ValueRange default_range(Kind kind, double centre_hz, double source_ohm);

enum class ExpandFault { none_left, too_many };

// The distinct topologies of `form`, in a fixed order. Neighbours of the same place and kind with
// open values merge into one (their range is what the pair can reach); topologies equal to an
// earlier one, and the empty network, are dropped. More than `most` is a fault.
Result<std::vector<Topology>, ExpandFault> expand(const Template& form, double centre_hz,
                                                  double source_ohm, std::size_t most = 4096);

}  // namespace bandwright
