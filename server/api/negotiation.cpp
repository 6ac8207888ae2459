#include "server/api/negotiation.h"

#include <charconv>
#include <string>
#include <vector>

#include "server/api/field_value.h"

namespace bandwright {
namespace {

// How exactly `range` names `type`: 3 itself, 2 its family, 1 anything, 0 not at all.
int specificity(std::string_view range, std::string_view type) {
  if (equal_ignoring_case(range, type)) return 3;
  const std::string_view family = type.substr(0, type.find('/'));
  if (range.ends_with("/*") && equal_ignoring_case(range.substr(0, range.size() - 2), family)) {
    return 2;
  }
  return range == "*/*" ? 1 : 0;
}

// Is the weight among the parameters zero, "not acceptable"? A weight nobody can read is not.
bool weight_is_zero(const std::vector<std::string_view>& parts) {
  for (std::size_t i = 1; i < parts.size(); ++i) {
    const std::size_t equals = parts[i].find('=');
    if (equals == std::string_view::npos) continue;
    if (!equal_ignoring_case(trimmed(parts[i].substr(0, equals)), "q")) continue;
    const std::string_view digits = trimmed(parts[i].substr(equals + 1));
    double weight = 1;
    std::from_chars(digits.data(), digits.data() + digits.size(), weight);
    return weight <= 0;
  }
  return false;
}

}  // namespace

bool accepts(const RequestHead& head, std::string_view type) {
  bool asked = false;
  int best = 0;
  bool allowed = false;
  for (const HeaderField& field : head.headers) {
    if (field.name != "accept") continue;
    for (const std::string_view range : split_list(field.value, ',')) {
      asked = true;
      const auto parts = split_list(range, ';');
      const int exact = parts.empty() ? 0 : specificity(parts[0], type);
      if (exact <= best) continue;
      best = exact;  // the most specific range decides
      allowed = !weight_is_zero(parts);
    }
  }
  return !asked || allowed;
}

bool is_json_type(std::string_view value) {
  const auto parts = split_list(value, ';');
  if (parts.empty() || !equal_ignoring_case(parts[0], "application/json")) return false;
  for (std::size_t i = 1; i < parts.size(); ++i) {
    const std::size_t equals = parts[i].find('=');
    if (equals == std::string_view::npos) return false;
    if (!equal_ignoring_case(trimmed(parts[i].substr(0, equals)), "charset")) continue;
    if (!equal_ignoring_case(unquoted(trimmed(parts[i].substr(equals + 1))), "utf-8")) return false;
  }
  return true;
}

bool none_match_names(const RequestHead& head, std::string_view etag) {
  for (const HeaderField& field : head.headers) {
    if (field.name != "if-none-match") continue;
    for (std::string_view tag : split_list(field.value, ',')) {
      if (tag == "*") return true;
      if (tag.starts_with("W/")) tag.remove_prefix(2);  // the comparison is weak
      if (tag == etag) return true;
    }
  }
  return false;
}

}  // namespace bandwright
