// A value of the request together with where it stands: the toolkit every decoder uses.
//
// A decoder asks a node for what it expects and gets it, or nothing. Whatever is wrong is written
// to the context with the node's JSON Pointer, so that decoding goes on and all faults are told
// together. Defaults that were used are written down beside them.
#pragma once

#include <cstdint>
#include <initializer_list>
#include <limits>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "server/api/fault.h"
#include "server/api/json.h"
#include "solver/base/quantity.h"

namespace bandwright {

struct DecodeContext {
  Faults faults;
  std::vector<std::string> assumptions;

  // Notes "pointer: text (default)", once.
  void assume_default(std::string_view pointer, std::string_view text);
  // Notes "pointer: text", once.
  void note(std::string_view pointer, std::string_view text);
};

// The allowed values of a quantity, ends included.
struct AllowedRange {
  double min = 0;
  double max = std::numeric_limits<double>::infinity();
};

// What physics and the arithmetic stand: figures outside are slips of a prefix.
inline constexpr AllowedRange kFrequencyHz{1e-3, 1e13};
inline constexpr AllowedRange kResistanceOhm{1e-9, 1e12};
inline constexpr AllowedRange kInductanceH{1e-18, 1e6};
inline constexpr AllowedRange kCapacitanceF{1e-21, 1e3};

class Node {
 public:
  Node(const Json& value, std::string pointer, DecodeContext& context)
      : value_(&value), pointer_(std::move(pointer)), context_(&context) {}

  const Json& json() const { return *value_; }
  const std::string& pointer() const { return pointer_; }
  DecodeContext& context() const { return *context_; }

  void fault(std::string code, std::string detail, std::vector<std::string> allowed = {},
             std::string suggestion = "") const;
  // A fault of the member `name`, present or not.
  void member_fault(std::string_view name, std::string code, std::string detail) const;
  // A member left out: notes its default.
  void assume_default(std::string_view name, std::string_view text) const;

  // An object with no members but `names`? A fault for each other member; true for any object.
  bool expect_object(std::span<const std::string_view> names) const;
  bool expect_object(std::initializer_list<std::string_view> names) const {
    return expect_object(std::span<const std::string_view>(names.begin(), names.size()));
  }
  bool has(std::string_view name) const;
  std::optional<Node> find(std::string_view name) const;
  // As find(), with a fault if the member is missing. `what` says what it is for.
  std::optional<Node> require(std::string_view name, std::string_view what) const;

  // The quantity of the member `name`, or `usual` where it is left out.
  std::optional<double> member_quantity(std::string_view name, std::optional<double> usual,
                                        Unit unit, AllowedRange allowed) const;
  // As member_quantity(), with a fault if the member is missing.
  std::optional<double> required_quantity(std::string_view name, std::string_view what, Unit unit,
                                          AllowedRange allowed) const;

  // The items of an array of `least` to `most` of `noun` ("goals").
  std::optional<std::vector<Node>> items(std::size_t least, std::size_t most,
                                         std::string_view noun) const;
  Node item(std::size_t index) const;

  // A number in SI units or a string with prefix and unit.
  std::optional<double> quantity(Unit unit, AllowedRange allowed) const;
  std::optional<std::int64_t> integer(std::int64_t min, std::int64_t max) const;
  std::optional<bool> boolean() const;
  std::optional<std::string> text(std::size_t most_bytes) const;
  // The index of the string in `words`.
  std::optional<std::size_t> choice(std::span<const std::string_view> words) const;
  std::optional<std::size_t> choice(std::initializer_list<std::string_view> words) const {
    return choice(std::span<const std::string_view>(words.begin(), words.size()));
  }

  void wrong_type(std::string_view expected) const;

 private:
  std::optional<double> quantity_from_text(Unit unit) const;

  const Json* value_;
  std::string pointer_;
  DecodeContext* context_;
};

// "150 MHz"; a bare number where there is no unit.
std::string shown(double value, Unit unit);

}  // namespace bandwright
