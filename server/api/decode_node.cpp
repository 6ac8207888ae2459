#include "server/api/decode_node.h"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <utility>

#include "server/api/nearest_name.h"

namespace bandwright {
namespace {

constexpr std::size_t kShownBytes = 40;

// A short look at a string from outside, cut between characters.
std::string in_quotes(std::string_view text) {
  std::size_t end = std::min(text.size(), kShownBytes);
  while (end < text.size() && end > 0 && (static_cast<unsigned char>(text[end]) & 0xC0) == 0x80) {
    --end;
  }
  std::string out = "\"";
  out += text.substr(0, end);
  out += end < text.size() ? "...\"" : "\"";
  return out;
}

std::string found_text(const Json& value) {
  if (value.is_string()) return "the string " + in_quotes(value.get_ref<const std::string&>());
  if (value.is_object()) return "an object";
  if (value.is_array()) return "an array";
  if (value.is_number()) return "the number " + value.dump();
  return value.dump();  // null, true, false
}

std::string number_text(double value) {
  char buffer[32];
  const auto [end, error] = std::to_chars(buffer, buffer + sizeof buffer, value);
  return error == std::errc() ? std::string(buffer, end) : "?";
}

std::string joined(std::span<const std::string_view> words) {
  std::string out;
  for (const std::string_view word : words) {
    if (!out.empty()) out += ", ";
    out += word;
  }
  return out;
}

std::vector<std::string> owned(std::span<const std::string_view> words) {
  return {words.begin(), words.end()};
}

std::string interval_text(AllowedRange allowed, Unit unit) {
  if (std::isinf(allowed.max)) return "at least " + shown(allowed.min, unit);
  return shown(allowed.min, unit) + " to " + shown(allowed.max, unit);
}

std::string example_of(Unit unit) {
  switch (unit) {
    case Unit::hertz:
      return "\"150 MHz\"";
    case Unit::ohm:
      return "\"50 ohm\"";
    case Unit::henry:
      return "\"3.3 nH\"";
    case Unit::farad:
      return "\"12 pF\"";
    case Unit::siemens:
      return "\"20 mS\"";
    case Unit::watt:
      return "\"5 W\"";
    case Unit::decibel:
      return "\"10 dB\"";
    case Unit::second:
      return "\"30 s\"";
    default:
      return "\"1\"";
  }
}

// Does `text` read well in some unit other than `unit`?
bool has_another_unit(std::string_view text, Unit unit) {
  constexpr Unit kUnits[] = {Unit::hertz,  Unit::ohm,    Unit::henry,   Unit::farad,
                             Unit::metre,  Unit::watt,   Unit::siemens, Unit::volt,
                             Unit::ampere, Unit::second, Unit::decibel};
  return std::any_of(std::begin(kUnits), std::end(kUnits),
                     [&](Unit other) { return other != unit && parse_quantity(text, other).ok(); });
}

}  // namespace

std::string shown(double value, Unit unit) {
  return unit == Unit::none ? number_text(value) : format_quantity(value, unit, 6);
}

void DecodeContext::note(std::string_view pointer, std::string_view text) {
  std::string line = std::string(pointer) + ": " + std::string(text);
  if (std::find(assumptions.begin(), assumptions.end(), line) == assumptions.end()) {
    assumptions.push_back(std::move(line));
  }
}

void DecodeContext::assume_default(std::string_view pointer, std::string_view text) {
  note(pointer, std::string(text) + " (default)");
}

void Node::fault(std::string code, std::string detail, std::vector<std::string> allowed,
                 std::string suggestion) const {
  context_->faults.add(
      {pointer_, std::move(code), std::move(detail), std::move(allowed), std::move(suggestion)});
}

void Node::member_fault(std::string_view name, std::string code, std::string detail) const {
  context_->faults.add({pointer_child(pointer_, name), std::move(code), std::move(detail), {}, ""});
}

void Node::assume_default(std::string_view name, std::string_view text) const {
  context_->assume_default(pointer_child(pointer_, name), text);
}

void Node::wrong_type(std::string_view expected) const {
  fault("wrong_type", "expected " + std::string(expected) + ", found " + found_text(*value_));
}

bool Node::expect_object(std::span<const std::string_view> names) const {
  if (!value_->is_object()) {
    wrong_type("an object with " + joined(names));
    return false;
  }
  for (const auto& [name, unused] : value_->items()) {
    if (std::find(names.begin(), names.end(), name) != names.end()) continue;
    std::string suggestion = nearest_name(name, names);
    std::string detail = "unknown member " + in_quotes(name);
    if (!suggestion.empty()) detail += "; did you mean \"" + suggestion + "\"?";
    if (suggestion.empty()) detail += "; allowed here: " + joined(names);
    context_->faults.add({pointer_child(pointer_, name), "unknown_member", std::move(detail),
                          owned(names), std::move(suggestion)});
  }
  return true;
}

bool Node::has(std::string_view name) const {
  return value_->is_object() && value_->contains(name);
}

std::optional<Node> Node::find(std::string_view name) const {
  if (!value_->is_object()) return std::nullopt;
  const auto member = value_->find(name);
  if (member == value_->end()) return std::nullopt;
  return Node(*member, pointer_child(pointer_, name), *context_);
}

std::optional<Node> Node::require(std::string_view name, std::string_view what) const {
  std::optional<Node> member = find(name);
  if (!member && value_->is_object()) {
    member_fault(name, "missing", "\"" + std::string(name) + "\" is missing: " + std::string(what));
  }
  return member;
}

std::optional<double> Node::member_quantity(std::string_view name, std::optional<double> usual,
                                            Unit unit, AllowedRange allowed) const {
  const std::optional<Node> member = find(name);
  return member ? member->quantity(unit, allowed) : usual;
}

std::optional<double> Node::required_quantity(std::string_view name, std::string_view what,
                                              Unit unit, AllowedRange allowed) const {
  const std::optional<Node> member = require(name, what);
  return member ? member->quantity(unit, allowed) : std::nullopt;
}

Node Node::item(std::size_t index) const {
  return Node((*value_)[index], pointer_child(pointer_, index), *context_);
}

std::optional<std::vector<Node>> Node::items(std::size_t least, std::size_t most,
                                             std::string_view noun) const {
  if (!value_->is_array()) {
    wrong_type("an array of " + std::string(noun));
    return std::nullopt;
  }
  const std::size_t size = value_->size();
  if (size < least) {
    fault(size == 0 ? "empty" : "too_few",
          (size == 0 ? "the array is empty; " : std::to_string(size) + " given; ") + "at least " +
              std::to_string(least) + " of " + std::string(noun) + " needed");
    return std::nullopt;
  }
  if (size > most) {
    fault("too_many", std::to_string(size) + " " + std::string(noun) + "; at most " +
                          std::to_string(most) + " are allowed");
    return std::nullopt;
  }
  std::vector<Node> nodes;
  nodes.reserve(size);
  for (std::size_t i = 0; i < size; ++i) nodes.push_back(item(i));
  return nodes;
}

std::optional<double> Node::quantity_from_text(Unit unit) const {
  const auto& text = value_->get_ref<const std::string&>();
  if (text.size() > kShownBytes) {
    fault("bad_quantity",
          in_quotes(text) + " is too long for a quantity; write it as " + example_of(unit));
    return std::nullopt;
  }
  const Result<double, std::string> read = parse_quantity(text, unit);
  if (read) return *read;
  fault(has_another_unit(text, unit) ? "wrong_unit" : "bad_quantity", read.error(), {},
        unit == Unit::none ? "" : "write it as " + example_of(unit));
  return std::nullopt;
}

std::optional<double> Node::quantity(Unit unit, AllowedRange allowed) const {
  std::optional<double> read;
  if (value_->is_number()) {
    read = value_->get<double>();
  } else if (value_->is_string()) {
    read = quantity_from_text(unit);
    if (!read) return std::nullopt;
  } else {
    const std::string symbol(unit_symbol(unit));
    wrong_type("a number" + (symbol.empty()
                                 ? ""
                                 : " in " + symbol + " or a string such as " + example_of(unit)));
    return std::nullopt;
  }
  if (*read >= allowed.min && *read <= allowed.max) return read;
  const std::string range = interval_text(allowed, unit);
  fault("out_of_range", shown(*read, unit) + " is outside what is allowed: " + range, {range});
  return std::nullopt;
}

std::optional<std::int64_t> Node::integer(std::int64_t min, std::int64_t max) const {
  const std::string range = std::to_string(min) + " to " + std::to_string(max);
  if (!value_->is_number()) {
    wrong_type("a whole number from " + range);
    return std::nullopt;
  }
  if (value_->is_number_float()) {
    const double number = value_->get<double>();
    if (number == std::floor(number)) {  // whole, and too large to be held as an integer
      fault("out_of_range", value_->dump() + " is outside what is allowed: " + range, {range});
    } else {
      wrong_type("a whole number from " + range);
    }
    return std::nullopt;
  }
  const bool inside =
      value_->is_number_unsigned()
          ? std::cmp_less_equal(value_->get<std::uint64_t>(), max) &&
                std::cmp_greater_equal(value_->get<std::uint64_t>(), min)
          : value_->get<std::int64_t>() >= min && value_->get<std::int64_t>() <= max;
  if (!inside) {
    fault("out_of_range", value_->dump() + " is outside what is allowed: " + range, {range});
    return std::nullopt;
  }
  return value_->get<std::int64_t>();
}

std::optional<bool> Node::boolean() const {
  if (value_->is_boolean()) return value_->get<bool>();
  wrong_type("true or false");
  return std::nullopt;
}

std::optional<std::string> Node::text(std::size_t most_bytes) const {
  if (!value_->is_string()) {
    wrong_type("a string");
    return std::nullopt;
  }
  const auto& held = value_->get_ref<const std::string&>();
  if (held.size() > most_bytes) {
    fault("too_long", "a string of " + std::to_string(held.size()) + " bytes; at most " +
                          std::to_string(most_bytes) + " are allowed");
    return std::nullopt;
  }
  return held;
}

std::optional<std::size_t> Node::choice(std::span<const std::string_view> words) const {
  if (!value_->is_string()) {
    wrong_type("one of " + joined(words));
    return std::nullopt;
  }
  const auto& held = value_->get_ref<const std::string&>();
  const auto found = std::find(words.begin(), words.end(), held);
  if (found != words.end()) return static_cast<std::size_t>(found - words.begin());
  std::string suggestion = nearest_name(held, words);
  std::string detail = in_quotes(held) + " is not one of " + joined(words);
  if (!suggestion.empty()) detail += "; did you mean \"" + suggestion + "\"?";
  fault("unknown_value", std::move(detail), owned(words), std::move(suggestion));
  return std::nullopt;
}

}  // namespace bandwright
