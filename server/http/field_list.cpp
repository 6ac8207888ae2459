#include "server/http/field_list.h"

#include <algorithm>

namespace bandwright {

std::string ascii_lower(std::string_view text) {
  std::string lower(text);
  std::transform(lower.begin(), lower.end(), lower.begin(), [](char c) {
    return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
  });
  return lower;
}

std::string_view trim_spaces(std::string_view text) {
  const std::size_t first = text.find_first_not_of(" \t");
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(" \t") - first + 1);
}

bool list_contains(std::string_view list, std::string_view lower_case_member) {
  while (!list.empty()) {
    const std::size_t comma = std::min(list.find(','), list.size());
    if (ascii_lower(trim_spaces(list.substr(0, comma))) == lower_case_member) return true;
    list.remove_prefix(std::min(comma + 1, list.size()));
  }
  return false;
}

}  // namespace bandwright
