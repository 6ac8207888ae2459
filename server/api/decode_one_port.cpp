#include "server/api/decode_one_port.h"

#include <algorithm>
#include <string>

#include "server/api/decode_samples.h"
#include "server/api/limits.h"

namespace bandwright {
namespace {

constexpr std::string_view kCircuitMembers[] = {"resistor_ohm", "inductor_h", "capacitor_f",
                                                "series", "parallel"};

std::optional<Circuit> decode_circuit(const Node& node);

std::optional<Circuit> decode_branches(const Node& node, Circuit::Type type) {
  const auto items = node.items(1, limits::kLoadPoints, "circuits");
  if (!items) return std::nullopt;
  Circuit circuit{type, 0, {}};
  for (const Node& item : *items) {
    if (auto part = decode_circuit(item)) circuit.parts.push_back(std::move(*part));
  }
  if (circuit.parts.size() != items->size()) return std::nullopt;
  return circuit;
}

std::optional<Circuit> decode_leaf(const Node& node, Circuit::Type type, Unit unit,
                                   AllowedRange allowed) {
  const std::optional<double> value = node.quantity(unit, allowed);
  if (!value) return std::nullopt;
  return Circuit{type, *value, {}};
}

// The recursion is as deep as the document, which the reader has limited.
std::optional<Circuit> decode_circuit(const Node& node) {
  if (!node.expect_object(kCircuitMembers)) return std::nullopt;
  if (node.json().size() != 1) {
    node.fault(node.json().empty() ? "empty" : "conflict",
               "a circuit has exactly one of resistor_ohm, inductor_h, capacitor_f, series, "
               "parallel; combine several with series or parallel");
    return std::nullopt;
  }
  if (const auto member = node.find("resistor_ohm")) {
    return decode_leaf(*member, Circuit::Type::resistor, Unit::ohm, kResistanceOhm);
  }
  if (const auto member = node.find("inductor_h")) {
    return decode_leaf(*member, Circuit::Type::inductor, Unit::henry, kInductanceH);
  }
  if (const auto member = node.find("capacitor_f")) {
    return decode_leaf(*member, Circuit::Type::capacitor, Unit::farad, kCapacitanceF);
  }
  if (const auto member = node.find("series")) {
    return decode_branches(*member, Circuit::Type::series);
  }
  if (const auto member = node.find("parallel")) {
    return decode_branches(*member, Circuit::Type::parallel);
  }
  return std::nullopt;  // the one member is unknown and has been told
}

// 50, "50 ohm" or [re, im].
std::optional<OnePort> decode_impedance(const Node& node) {
  constexpr AllowedRange kImaginary{-1e12, 1e12};
  constexpr AllowedRange kReal{1e-6, 1e9};
  if (!node.json().is_array()) {
    const std::optional<double> value = node.quantity(Unit::ohm, kReal);
    return value ? std::optional(OnePort::constant(*value)) : std::nullopt;
  }
  const auto items = node.items(2, 2, "figures, [re, im]");
  if (!items) return std::nullopt;
  const auto re = (*items)[0].quantity(Unit::ohm, kReal);
  const auto im = (*items)[1].quantity(Unit::ohm, kImaginary);
  if (!re || !im) return std::nullopt;
  return OnePort::constant({*re, *im});
}

std::vector<std::string_view> form_names(PortRole role) {
  std::vector<std::string_view> names{"touchstone", "samples", "circuit"};
  if (role == PortRole::source) names.push_back("impedance_ohm");
  return names;
}

std::string joined_or(const std::vector<std::string_view>& names) {
  std::string out;
  for (std::size_t i = 0; i < names.size(); ++i) {
    if (i > 0) out += i + 1 == names.size() ? " or " : ", ";
    out += names[i];
  }
  return out;
}

// The one form the object uses; a fault if there is none or more than one.
std::optional<std::string_view> decode_form(const Node& node, PortRole role) {
  const std::vector<std::string_view> forms = form_names(role);
  std::vector<std::string_view> given;
  std::copy_if(forms.begin(), forms.end(), std::back_inserter(given),
               [&](std::string_view form) { return node.has(form); });
  if (given.size() == 1) return given.front();
  const std::string allowed = joined_or(forms);
  if (given.empty()) {
    node.fault("empty", "nothing is given; one of " + allowed + " is needed",
               {forms.begin(), forms.end()});
  } else {
    node.fault("conflict", std::string(given[0]) + " and " + std::string(given[1]) +
                               " are both given; keep one");
  }
  return std::nullopt;
}

std::optional<LoadState> decode_state(const Node& node, std::size_t index) {
  std::string name = "state " + std::to_string(index + 1);
  if (const auto name_node = node.find("name")) {
    const auto given = name_node->text(limits::kNameBytes);
    if (!given) return std::nullopt;
    name = *given;
  } else if (node.json().is_object()) {
    node.assume_default("name", "\"" + name + "\"");
  }
  auto port = decode_one_port(node, PortRole::load, true);
  if (!port) return std::nullopt;
  return LoadState{std::move(name), std::move(*port)};
}

std::optional<std::vector<LoadState>> decode_states(const Node& loads) {
  const auto items = loads.items(1, limits::kLoadStates, "loads");
  if (!items) return std::nullopt;
  std::vector<LoadState> states;
  for (std::size_t i = 0; i < items->size(); ++i) {
    if (auto state = decode_state((*items)[i], i)) states.push_back(std::move(*state));
  }
  if (states.size() != items->size()) return std::nullopt;
  for (std::size_t i = 1; i < states.size(); ++i) {
    for (std::size_t j = 0; j < i; ++j) {
      if (states[i].name != states[j].name) continue;
      (*items)[i].member_fault("name", "duplicate",
                               "another load has the same name; give each its own");
      return std::nullopt;
    }
  }
  return states;
}

}  // namespace

std::optional<OnePort> decode_one_port(const Node& node, PortRole role, bool named) {
  std::vector<std::string_view> members = form_names(role);
  members.push_back("port");
  if (named) members.push_back("name");
  if (!node.expect_object(members)) return std::nullopt;
  const std::optional<std::string_view> form = decode_form(node, role);
  if (!form) return std::nullopt;
  if (*form == "touchstone") return decode_touchstone(node, role);
  if (node.has("port")) {
    node.member_fault("port", "conflict", "port goes with touchstone only; remove it");
    return std::nullopt;
  }
  const Node member = *node.find(*form);
  if (*form == "samples") return decode_samples(member, role);
  if (*form == "impedance_ohm") return decode_impedance(member);
  auto circuit = decode_circuit(member);
  return circuit ? std::optional(OnePort::from_circuit(std::move(*circuit))) : std::nullopt;
}

std::optional<OnePort> decode_source(const Node& request) {
  if (const auto source = request.find("source")) {
    return decode_one_port(*source, PortRole::source, false);
  }
  request.assume_default("source", "50 ohm");
  return OnePort::constant(50.0);
}

std::optional<std::vector<LoadState>> decode_loads(const Node& request) {
  const auto load = request.find("load");
  const auto loads = request.find("loads");
  if (load && loads) {
    loads->fault("conflict", "load and loads are both given; keep one");
    return std::nullopt;
  }
  if (loads) return decode_states(*loads);
  if (!load) {
    request.member_fault("load", "missing",
                         "a load is missing: give \"load\", or \"loads\" for several states");
    return std::nullopt;
  }
  auto port = decode_one_port(*load, PortRole::load, false);
  if (!port) return std::nullopt;
  std::vector<LoadState> states;
  states.push_back({"", std::move(*port)});
  return states;
}

bool check_covered(const Node& node, double frequency_hz, const OnePort& port,
                   const std::string& noun) {
  if (port.covers(frequency_hz)) return true;
  const bool above = frequency_hz > port.last_hz();
  node.fault("outside_data", shown(frequency_hz, Unit::hertz) + " is " +
                                 (above ? "above" : "below") + " " + noun + "'s " +
                                 (above ? "last" : "first") + " sample, " +
                                 shown(above ? port.last_hz() : port.first_hz(), Unit::hertz) +
                                 "; nothing is extrapolated");
  return false;
}

}  // namespace bandwright
