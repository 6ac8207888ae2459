// Expansion of templates.
//
// A combination takes one choice, or none where the element is optional, at every position. It is
// merged, written as a key of plain numbers, and kept if no earlier combination of equal or
// smaller size had the same key.

#include "solver/rf/template.h"

#include <algorithm>
#include <cstddef>
#include <map>
#include <numbers>
#include <set>
#include <tuple>
#include <utility>

namespace bandwright {
namespace {

// Merging cannot be relied on to bring a template with more than this many times the wanted number
// of combinations down to it, so such a template is refused without building any.
constexpr std::size_t kCombinationsPerTopology = 16;

// The value of two elements that act as one: their sum, or the reciprocal of the
// sum of reciprocals.
double joined(double a, double b, bool adds) {
  return adds ? a + b : a * (b / (a + b));
}

// What a pair at one place can reach, each of the two alone included.
ValueRange merged_range(const Slot& a, const Slot& b) {
  const bool adds = (a.kind == Kind::capacitor) == (a.place == Place::shunt);
  const double low = joined(a.range.min, b.range.min, adds);
  const double high = joined(a.range.max, b.range.max, adds);
  return {std::min({low, a.range.min, b.range.min}), std::max({high, a.range.max, b.range.max})};
}

bool mergeable(const Slot& a, const Slot& b) {
  return a.place == b.place && a.kind == b.kind && !a.fixed() && !b.fixed() && a.part == b.part;
}

Topology merged(const std::vector<Slot>& slots) {
  Topology topology;
  for (const Slot& slot : slots) {
    if (!topology.slots.empty() && mergeable(topology.slots.back(), slot)) {
      topology.slots.back().range = merged_range(topology.slots.back(), slot);
    } else {
      topology.slots.push_back(slot);
    }
  }
  return topology;
}

// The alternatives of one position; an empty one leaves the position out.
using Position = std::vector<std::optional<Slot>>;

// A family of combinations: one alternative at each position.
using Family = std::vector<Position>;

Position position(Place place, const std::vector<KindChoice>& choices, bool optional, int index,
                  double centre_hz, double source_ohm) {
  Position alternatives;
  for (const KindChoice& choice : choices) {
    const ValueRange range =
        choice.range ? *choice.range : default_range(choice.kind, centre_hz, source_ohm);
    alternatives.push_back(Slot{place, choice.kind, range, choice.part, index});
  }
  if (optional) alternatives.push_back(std::nullopt);
  return alternatives;
}

Family family_of(const std::vector<TemplateElement>& elements, double centre_hz,
                 double source_ohm) {
  Family family;
  for (const TemplateElement& element : elements) {
    family.push_back(position(element.place, element.choices, element.optional,
                              static_cast<int>(family.size()), centre_hz, source_ohm));
  }
  return family;
}

Family ladder_family(const LadderRule& rule, int elements, Place first, double centre_hz,
                     double source_ohm) {
  Family family;
  Place place = first;
  for (int i = 0; i < elements; ++i) {
    family.push_back(position(place, rule.choices, false, -1, centre_hz, source_ohm));
    place = place == Place::series ? Place::shunt : Place::series;
  }
  return family;
}

// The number of combinations, or anything above `ceiling` once it is passed.
std::size_t count_combinations(const std::vector<std::size_t>& alternatives, std::size_t ceiling) {
  if (std::find(alternatives.begin(), alternatives.end(), 0u) != alternatives.end()) return 0;
  std::size_t count = 1;
  for (const std::size_t n : alternatives) {
    if (count > ceiling / n) return ceiling + 1;
    count *= n;
  }
  return count;
}

// Collects the distinct ones among the topologies offered, shorter ones first.
class Collector {
 public:
  void offer(Topology topology) {
    if (topology.slots.empty() || !seen_.insert(key(topology)).second) return;
    ++count_;
    by_size_[topology.slots.size()].push_back(std::move(topology));
  }
  std::size_t count() const { return count_; }

  std::vector<Topology> take() {
    std::vector<Topology> all;
    for (auto& [size, topologies] : by_size_) {
      std::move(topologies.begin(), topologies.end(), std::back_inserter(all));
    }
    return all;
  }

 private:
  using SlotKey = std::tuple<Place, Kind, double, double, std::size_t>;

  std::vector<SlotKey> key(const Topology& topology) {
    std::vector<SlotKey> key;
    for (const Slot& slot : topology.slots) {
      key.emplace_back(slot.place, slot.kind, slot.range.min, slot.range.max, number(slot.part));
    }
    return key;
  }

  // A number for each distinct part, as parts can be compared but not ordered.
  std::size_t number(const Part& part) {
    const auto found = std::find(parts_.begin(), parts_.end(), part);
    if (found != parts_.end()) return static_cast<std::size_t>(found - parts_.begin());
    parts_.push_back(part);
    return parts_.size() - 1;
  }

  std::vector<Part> parts_;
  std::set<std::vector<SlotKey>> seen_;
  std::map<std::size_t, std::vector<Topology>> by_size_;
  std::size_t count_ = 0;
};

// Offers every combination of `family`, the last position turning fastest, until more than `most`
// distinct topologies are held.
void offer_all(const Family& family, std::size_t most, Collector& collector) {
  if (std::any_of(family.begin(), family.end(), [](const Position& p) { return p.empty(); })) {
    return;
  }
  std::vector<std::size_t> turn(family.size(), 0);
  for (;;) {
    std::vector<Slot> slots;
    for (std::size_t i = 0; i < family.size(); ++i) {
      if (const std::optional<Slot>& slot = family[i][turn[i]]) slots.push_back(*slot);
    }
    collector.offer(merged(slots));
    if (collector.count() > most) return;
    std::size_t i = family.size();
    while (i > 0 && ++turn[i - 1] == family[i - 1].size()) turn[--i] = 0;
    if (i == 0) return;
  }
}

// The number of combinations of `form`, or anything above `ceiling` once it is passed.
std::size_t count_combinations(const Template& form, std::size_t ceiling) {
  std::vector<std::size_t> alternatives;
  if (const auto* elements = std::get_if<std::vector<TemplateElement>>(&form)) {
    for (const TemplateElement& element : *elements) {
      alternatives.push_back(element.choices.size() + (element.optional ? 1 : 0));
    }
    return count_combinations(alternatives, ceiling);
  }
  const LadderRule& rule = std::get<LadderRule>(form);
  std::size_t total = 0;
  for (int n = 1; n <= rule.max_elements && total <= ceiling; ++n) {
    alternatives.push_back(rule.choices.size());
    if (n >= rule.min_elements) total += 2 * count_combinations(alternatives, ceiling);
  }
  return total;
}

void offer_all(const Template& form, double centre_hz, double source_ohm, std::size_t most,
               Collector& collector) {
  if (const auto* elements = std::get_if<std::vector<TemplateElement>>(&form)) {
    offer_all(family_of(*elements, centre_hz, source_ohm), most, collector);
    return;
  }
  const LadderRule& rule = std::get<LadderRule>(form);
  for (int n = std::max(1, rule.min_elements); n <= rule.max_elements; ++n) {
    for (const Place first : {Place::series, Place::shunt}) {
      offer_all(ladder_family(rule, n, first, centre_hz, source_ohm), most, collector);
      if (collector.count() > most) return;
    }
  }
}

}  // namespace

ValueRange default_range(Kind kind, double centre_hz, double source_ohm) {
  constexpr double kReach = 50.0;
  const double low_ohm = source_ohm / kReach;
  const double high_ohm = source_ohm * kReach;
  const double omega = 2.0 * std::numbers::pi * centre_hz;
  switch (kind) {
    case Kind::inductor:
      return {low_ohm / omega, high_ohm / omega};
    case Kind::capacitor:
      return {1.0 / (omega * high_ohm), 1.0 / (omega * low_ohm)};
    case Kind::resistor:
      break;
  }
  return {low_ohm, high_ohm};
}

Result<std::vector<Topology>, ExpandFault> expand(const Template& form, double centre_hz,
                                                  double source_ohm, std::size_t most) {
  const std::size_t ceiling = most * kCombinationsPerTopology;
  if (count_combinations(form, ceiling) > ceiling) return ExpandFault::too_many;
  Collector collector;
  offer_all(form, centre_hz, source_ohm, most, collector);
  if (collector.count() > most) return ExpandFault::too_many;
  if (collector.count() == 0) return ExpandFault::none_left;
  return collector.take();
}

}  // namespace bandwright
