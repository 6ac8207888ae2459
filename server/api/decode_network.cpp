#include "server/api/decode_network.h"

#include <string>

#include "server/api/decode_template.h"
#include "server/api/limits.h"

namespace bandwright {
namespace {

std::optional<Kind> decode_kind(const Node& element) {
  const auto node = element.require("kind", "inductor, capacitor or resistor");
  if (!node) return std::nullopt;
  const auto words = kind_words();
  const auto index = node->choice(words);
  return index ? std::optional(kKindNames[*index].kind) : std::nullopt;
}

std::optional<Slot> decode_slot(const Node& node, const PartTable& parts) {
  const auto kind = decode_kind(node);
  if (!kind) return std::nullopt;
  const KindNames& names = names_of(*kind);
  if (!node.expect_object(
          {"place", "kind", names.value, "label", "tolerance_percent", names.tolerance, "part"})) {
    return std::nullopt;
  }
  const auto place = decode_place(node);
  const auto value =
      node.required_quantity(names.value, "the element's value", kind_unit(*kind), names.values);
  if (const auto label = node.find("label")) label->text(limits::kNameBytes);
  PartDraft draft = element_part(node, *kind, false, parts);
  decode_tolerance(node, *kind, draft);
  note_part_defaults(draft, *kind, false, node.context());
  if (!place || !value) return std::nullopt;
  Slot slot;
  slot.place = *place;
  slot.kind = *kind;
  slot.range = {*value, *value};
  slot.part = draft.part;
  return slot;
}

}  // namespace

std::optional<FixedNetwork> decode_network(const Node& request, const PartTable& parts) {
  const auto node = request.require("network", "the elements from the source to the load");
  if (!node) return std::nullopt;
  const auto items = node->items(1, limits::kElements, "elements");
  if (!items) return std::nullopt;
  FixedNetwork network;
  for (const Node& item : *items) {
    if (!item.json().is_object()) {
      item.wrong_type("an object with place, kind and a value");
      continue;
    }
    auto slot = decode_slot(item, parts);
    if (!slot) continue;
    slot->template_index = static_cast<int>(network.values.size());
    network.values.push_back(slot->range.min);
    network.topology.slots.push_back(std::move(*slot));
  }
  if (network.values.size() != items->size()) return std::nullopt;
  return network;
}

}  // namespace bandwright
