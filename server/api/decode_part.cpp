#include "server/api/decode_part.h"

#include <algorithm>
#include <string>

#include "server/api/limits.h"

namespace bandwright {
namespace {

constexpr double kTolerancePercentMost = 100;
constexpr AllowedRange kQuality{1e-3, 1e9};

std::vector<std::string_view> member_names(Kind kind) {
  std::vector<std::string_view> names{"values", "tolerance_percent", names_of(kind).tolerance};
  if (kind == Kind::inductor) names.insert(names.end(), {"q", "self_resonance_hz"});
  if (kind == Kind::capacitor) names.insert(names.end(), {"q", "esr_ohm", "self_inductance_h"});
  return names;
}

std::optional<ValueRule> decode_value_list(const Node& node, Kind kind) {
  const auto items = node.items(1, limits::kListedValues, "values");
  if (!items) return std::nullopt;
  std::vector<double> values;
  for (const Node& item : *items) {
    if (const auto value = item.quantity(kind_unit(kind), names_of(kind).values)) {
      values.push_back(*value);
    }
  }
  if (values.size() != items->size()) return std::nullopt;
  std::sort(values.begin(), values.end());
  values.erase(std::unique(values.begin(), values.end()), values.end());
  return ValueRule(std::move(values));
}

// "E24", "any" or a list.
std::optional<ValueRule> decode_values(const Node& node, Kind kind) {
  if (node.json().is_array()) return decode_value_list(node, kind);
  std::vector<std::string_view> words{"any"};
  for (const Series series : all_series()) words.push_back(series_name(series));
  if (!node.json().is_string()) {
    node.wrong_type("a series such as \"E24\", \"any\" or a list of quantities");
    return std::nullopt;
  }
  const auto word = node.choice(words);
  if (!word) return std::nullopt;
  if (*word == 0) return ValueRule(AnyValue{});
  return ValueRule(all_series()[*word - 1]);
}

// 60, or {"value": 60, "at_hz": 150e6, "exponent": 0.5}.
std::optional<QualityFactor> decode_quality(const Node& node) {
  if (!node.json().is_object()) {
    const auto value = node.quantity(Unit::none, kQuality);
    return value ? std::optional(QualityFactor{*value, 1, 0}) : std::nullopt;
  }
  node.expect_object({"value", "at_hz", "exponent"});
  QualityFactor quality;
  const auto value_node = node.require("value", "the quality factor at at_hz");
  const auto value = value_node ? value_node->quantity(Unit::none, kQuality) : std::nullopt;
  std::optional<double> exponent = 0.0;
  if (const auto exponent_node = node.find("exponent")) {
    exponent = exponent_node->quantity(Unit::none, {-4, 4});
  } else {
    node.assume_default("exponent", "0");
  }
  std::optional<double> at_hz = 1.0;
  if (const auto at_node = node.find("at_hz")) {
    at_hz = at_node->quantity(Unit::hertz, kFrequencyHz);
  } else if (exponent && *exponent != 0) {
    node.require("at_hz", "the frequency at which the quality factor is value");
    return std::nullopt;
  }
  if (!value || !exponent || !at_hz) return std::nullopt;
  return QualityFactor{*value, *at_hz, *exponent};
}

void decode_loss(const Node& node, PartDraft& draft) {
  if (const auto q = node.find("q")) {
    draft.part.q = decode_quality(*q);
    draft.loss_given = true;
  }
  if (const auto esr = node.find("esr_ohm")) {
    draft.part.esr_ohm = esr->quantity(Unit::ohm, {0, 1e6}).value_or(0);
    draft.loss_given = true;
  }
}

void decode_parasitics(const Node& node, PartDraft& draft) {
  if (const auto resonance = node.find("self_resonance_hz")) {
    draft.part.self_resonance_hz = resonance->quantity(Unit::hertz, kFrequencyHz);
    draft.parasitic_given = true;
  }
  if (const auto inductance = node.find("self_inductance_h")) {
    draft.part.self_inductance_h = inductance->quantity(Unit::henry, {0, 1}).value_or(0);
    draft.parasitic_given = true;
  }
}

std::string rule_text(const Part& part) {
  if (const Series* series = std::get_if<Series>(&part.values)) {
    return std::string(series_name(*series)) + " value";
  }
  return "listed value";
}

}  // namespace

void decode_tolerance(const Node& node, Kind kind, PartDraft& draft) {
  const auto percent = node.find("tolerance_percent");
  const auto absolute = node.find(names_of(kind).tolerance);
  if (percent && absolute) {
    absolute->fault("conflict", "tolerance_percent and " + std::string(names_of(kind).tolerance) +
                                    " are both given; keep one");
    return;
  }
  if (!percent && !absolute) return;
  draft.tolerance_given = true;
  draft.part.tolerance = {};
  if (percent) {
    const auto value = percent->quantity(Unit::none, {0, kTolerancePercentMost});
    draft.part.tolerance.relative = value.value_or(0) / 100;
  } else {
    const auto value = absolute->quantity(kind_unit(kind), {0, names_of(kind).values.max});
    draft.part.tolerance.absolute = value.value_or(0);
  }
}

void decode_part(const Node& node, Kind kind, PartDraft& draft) {
  if (!node.expect_object(member_names(kind))) return;
  if (const auto values = node.find("values")) {
    if (auto rule = decode_values(*values, kind)) draft.part.values = std::move(*rule);
    draft.values_given = true;
  }
  decode_tolerance(node, kind, draft);
  if (kind == Kind::resistor) return;
  decode_loss(node, draft);
  decode_parasitics(node, draft);
}

PartTable decode_parts(const Node& request) {
  PartTable table;
  const auto parts = request.find("parts");
  const auto words = kind_words();
  if (!parts || !parts->expect_object(words)) return table;
  for (std::size_t i = 0; i < words.size(); ++i) {
    if (const auto part = parts->find(words[i])) decode_part(*part, kKindNames[i].kind, table[i]);
  }
  return table;
}

void note_part_defaults(const PartDraft& draft, Kind kind, bool open_value,
                        DecodeContext& context) {
  const std::string pointer = pointer_child("#/parts", kind_name(kind));
  if (open_value && !draft.values_given) {
    context.assume_default(pointer_child(pointer, "values"), series_name(Series::e24));
  }
  if (!draft.tolerance_given) {
    context.assume_default(pointer_child(pointer, "tolerance_percent"), "5 %");
  }
  if (kind == Kind::resistor) return;
  if (!draft.loss_given) context.assume_default(pointer_child(pointer, "q"), "no loss");
  if (draft.parasitic_given) return;
  if (kind == Kind::inductor) {
    context.assume_default(pointer_child(pointer, "self_resonance_hz"), "none");
  } else {
    context.assume_default(pointer_child(pointer, "self_inductance_h"), "0 H");
  }
}

bool check_offered(const Node& node, const Part& part, Kind kind, double min, double max) {
  if (std::holds_alternative<AnyValue>(part.values)) return true;
  if (!offered_values(part, min, max).empty()) return true;
  node.fault("no_value_in_range",
             "no " + rule_text(part) + " lies between " + shown(min, kind_unit(kind)) + " and " +
                 shown(max, kind_unit(kind)) + "; widen the range or offer other values");
  return false;
}

}  // namespace bandwright
