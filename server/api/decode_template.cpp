#include "server/api/decode_template.h"

#include <algorithm>
#include <string>

#include "server/api/limits.h"

namespace bandwright {
namespace {

class TemplateDecoder {
 public:
  TemplateDecoder(const PartTable& parts, const std::optional<RangeBasis>& basis)
      : parts_(parts), basis_(basis) {}

  std::optional<Template> elements(const Node& node) const;
  std::optional<Template> ladder(const Node& node) const;

 private:
  std::optional<TemplateElement> element(const Node& node) const;
  std::optional<KindChoice> choice(const Node& node, Kind kind, bool several) const;
  std::optional<ValueRange> range(const Node& node, Kind kind) const;
  std::optional<ValueRange> default_range_of(Kind kind) const {
    if (!basis_) return std::nullopt;
    return default_range(kind, basis_->centre_hz, basis_->source_ohm);
  }

  const PartTable& parts_;
  const std::optional<RangeBasis>& basis_;
};

std::string range_text(const ValueRange& range, Kind kind) {
  return format_quantity(range.min, kind_unit(kind)) + " to " +
         format_quantity(range.max, kind_unit(kind));
}

std::optional<Kind> decode_kind(const Node& node) {
  const auto words = kind_words();
  const auto index = node.choice(words);
  return index ? std::optional(kKindNames[*index].kind) : std::nullopt;
}

// An array of distinct kinds.
std::optional<std::vector<Kind>> decode_kind_list(const Node& node) {
  const auto items = node.items(1, kKindNames.size(), "kinds");
  if (!items) return std::nullopt;
  std::vector<Kind> kinds;
  for (const Node& item : *items) {
    const auto kind = decode_kind(item);
    if (!kind) continue;
    if (std::find(kinds.begin(), kinds.end(), *kind) != kinds.end()) {
      item.fault("duplicate", std::string(kind_name(*kind)) + " is given twice");
      continue;
    }
    kinds.push_back(*kind);
  }
  if (kinds.size() != items->size()) return std::nullopt;
  return kinds;
}

// The element's kinds: one word, or an array of them.
std::optional<std::vector<Kind>> decode_kinds(const Node& element) {
  const auto node = element.require("kind", "inductor, capacitor or resistor, or a list of them");
  if (!node) return std::nullopt;
  if (node->json().is_array()) return decode_kind_list(*node);
  if (const auto kind = decode_kind(*node)) return std::vector<Kind>{*kind};
  return std::nullopt;
}

// A value of a kind the element does not have would be silently without effect.
bool check_value_members(const Node& element, const std::vector<Kind>& kinds) {
  bool fits = true;
  for (const KindNames& names : kKindNames) {
    if (std::find(kinds.begin(), kinds.end(), names.kind) != kinds.end()) continue;
    if (!element.has(names.value)) continue;
    element.member_fault(names.value, "conflict",
                         std::string(names.value) + " belongs to the kind " +
                             std::string(kind_name(names.kind)) +
                             ", which this element does not have");
    fits = false;
  }
  return fits;
}

std::optional<ValueRange> TemplateDecoder::range(const Node& node, Kind kind) const {
  const Unit unit = kind_unit(kind);
  const AllowedRange allowed = names_of(kind).values;
  if (!node.json().is_object()) {
    const auto value = node.quantity(unit, allowed);
    return value ? std::optional(ValueRange{*value, *value}) : std::nullopt;
  }
  node.expect_object({"min", "max"});
  const auto usual = default_range_of(kind);
  std::optional<double> least;
  std::optional<double> most;
  if (usual) {
    least = usual->min;
    most = usual->max;
  }
  const bool has_min = node.has("min");
  const bool has_max = node.has("max");
  const auto min = node.member_quantity("min", least, unit, allowed);
  const auto max = node.member_quantity("max", most, unit, allowed);
  if (!min || !max) return std::nullopt;
  if (*min > *max) {
    const std::string_view whose_min = has_min ? "min " : "the default min ";
    const std::string_view whose_max = has_max ? "max " : "the default max ";
    node.fault("reversed", std::string(whose_min) + shown(*min, unit) + " is above " +
                               std::string(whose_max) + shown(*max, unit));
    return std::nullopt;
  }
  if (!has_min) node.assume_default("min", format_quantity(*min, unit));
  if (!has_max) node.assume_default("max", format_quantity(*max, unit));
  return ValueRange{*min, *max};
}

std::optional<KindChoice> TemplateDecoder::choice(const Node& node, Kind kind, bool several) const {
  const PartDraft draft = element_part(node, kind, several, parts_);
  const auto value = node.find(names_of(kind).value);
  std::optional<ValueRange> range = value ? this->range(*value, kind) : default_range_of(kind);
  if (!range) return std::nullopt;
  if (!value) {
    node.assume_default(names_of(kind).value, range_text(*range, kind));
  }
  note_part_defaults(draft, kind, !range->fixed(), node.context());
  if (!range->fixed() &&
      !check_offered(value ? *value : node, draft.part, kind, range->min, range->max)) {
    return std::nullopt;
  }
  return KindChoice{kind, range, draft.part};
}

std::optional<TemplateElement> TemplateDecoder::element(const Node& node) const {
  if (!node.expect_object({"place", "kind", "inductance_h", "capacitance_f", "resistance_ohm",
                           "optional", "part"})) {
    return std::nullopt;
  }
  const auto place = decode_place(node);
  std::optional<bool> optional = false;
  if (const auto flag = node.find("optional")) optional = flag->boolean();
  const auto kinds = decode_kinds(node);
  if (!kinds) return std::nullopt;
  bool complete = check_value_members(node, *kinds);
  TemplateElement element;
  for (const Kind kind : *kinds) {
    if (auto one = choice(node, kind, kinds->size() > 1)) {
      element.choices.push_back(std::move(*one));
    } else {
      complete = false;
    }
  }
  if (!place || !optional || !complete) return std::nullopt;
  element.place = *place;
  element.optional = *optional;
  return element;
}

std::optional<Template> TemplateDecoder::elements(const Node& node) const {
  const auto items = node.items(1, limits::kElements, "elements");
  if (!items) return std::nullopt;
  std::vector<TemplateElement> decoded;
  for (const Node& item : *items) {
    if (auto one = element(item)) decoded.push_back(std::move(*one));
  }
  if (decoded.size() != items->size()) return std::nullopt;
  return Template(std::move(decoded));
}

// A number of elements; 0 if it is at fault.
int decode_count(const Node& node) {
  constexpr int kMost = static_cast<int>(limits::kElements);
  return static_cast<int>(node.integer(1, kMost).value_or(0));
}

std::optional<Template> TemplateDecoder::ladder(const Node& node) const {
  if (!node.expect_object({"min_elements", "max_elements", "kinds"})) return std::nullopt;
  LadderRule rule;
  if (const auto min = node.find("min_elements")) {
    rule.min_elements = decode_count(*min);
  } else {
    node.assume_default("min_elements", std::to_string(rule.min_elements));
  }
  const auto max = node.require("max_elements", "the most elements of a ladder");
  rule.max_elements = max ? decode_count(*max) : 0;
  std::optional<std::vector<Kind>> kinds{{Kind::inductor, Kind::capacitor}};
  if (const auto kinds_node = node.find("kinds")) {
    kinds = decode_kind_list(*kinds_node);
  } else {
    node.assume_default("kinds", "inductor, capacitor");
  }
  if (rule.min_elements == 0 || rule.max_elements == 0 || !kinds) return std::nullopt;
  if (rule.min_elements > rule.max_elements) {
    node.member_fault("min_elements", "reversed",
                      "min_elements " + std::to_string(rule.min_elements) +
                          " is above max_elements " + std::to_string(rule.max_elements));
    return std::nullopt;
  }
  for (const Kind kind : *kinds) {
    const PartDraft& draft = parts_[static_cast<std::size_t>(kind)];
    const auto range = default_range_of(kind);
    if (!range) return std::nullopt;
    node.context().assume_default(
        pointer_child(node.pointer(), "kinds"),
        std::string(names_of(kind).value) + " " + range_text(*range, kind));
    note_part_defaults(draft, kind, true, node.context());
    if (!check_offered(node, draft.part, kind, range->min, range->max)) return std::nullopt;
    rule.choices.push_back({kind, range, draft.part});
  }
  return Template(std::move(rule));
}

bool is_kind_table(const Node& part) {
  const auto words = kind_words();
  return std::any_of(words.begin(), words.end(),
                     [&](std::string_view word) { return part.has(word); });
}

}  // namespace

std::optional<Place> decode_place(const Node& element) {
  const auto node = element.require("place", "series or shunt");
  if (!node) return std::nullopt;
  const auto index = node->choice({place_name(Place::series), place_name(Place::shunt)});
  if (!index) return std::nullopt;
  return *index == 0 ? Place::series : Place::shunt;
}

PartDraft element_part(const Node& element, Kind kind, bool several_kinds, const PartTable& parts) {
  PartDraft draft = parts[static_cast<std::size_t>(kind)];
  const auto own = element.find("part");
  if (!own) return draft;
  if (!several_kinds || !is_kind_table(*own)) {
    decode_part(*own, kind, draft);
    return draft;
  }
  const auto words = kind_words();
  own->expect_object(words);
  if (const auto part = own->find(kind_name(kind))) decode_part(*part, kind, draft);
  return draft;
}

std::optional<Template> decode_template(const Node& request, const PartTable& parts,
                                        const std::optional<RangeBasis>& basis) {
  const auto node = request.require("template", "what the network may look like");
  if (!node || !node->expect_object({"elements", "ladder"})) return std::nullopt;
  const auto elements = node->find("elements");
  const auto ladder = node->find("ladder");
  if (elements && ladder) {
    node->fault("conflict", "elements and ladder are both given; keep one");
    return std::nullopt;
  }
  const TemplateDecoder decoder(parts, basis);
  if (elements) return decoder.elements(*elements);
  if (ladder) return decoder.ladder(*ladder);
  node->fault("empty", "the template is empty; elements or ladder is needed",
              {"elements", "ladder"});
  return std::nullopt;
}

std::optional<std::vector<Topology>> expand_template(const Node& request, const Template& form,
                                                     const RangeBasis& basis) {
  auto expanded = expand(form, basis.centre_hz, basis.source_ohm, limits::kTopologies);
  if (expanded) return std::move(*expanded);
  if (expanded.error() == ExpandFault::none_left) {
    request.member_fault("template", "no_topology",
                         "no topology is left: the template only allows the empty network");
  } else {
    request.member_fault("template", "too_many_topologies",
                         "the template has more than " + std::to_string(limits::kTopologies) +
                             " topologies; allow fewer kinds, elements or options");
  }
  return std::nullopt;
}

}  // namespace bandwright
