#include "server/api/field_value.h"

#include <algorithm>

namespace bandwright {
namespace {

char lower(char c) {
  return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
}

}  // namespace

std::string_view trimmed(std::string_view text) {
  const std::size_t first = text.find_first_not_of(" \t");
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(" \t") - first + 1);
}

bool equal_ignoring_case(std::string_view a, std::string_view b) {
  return std::equal(a.begin(), a.end(), b.begin(), b.end(),
                    [](char x, char y) { return lower(x) == lower(y); });
}

std::string_view unquoted(std::string_view text) {
  if (text.size() < 2 || text.front() != '"' || text.back() != '"') return text;
  return text.substr(1, text.size() - 2);
}

std::vector<std::string_view> split_list(std::string_view text, char separator) {
  std::vector<std::string_view> pieces;
  bool in_quotes = false;
  std::size_t begin = 0;
  const auto take = [&](std::size_t end) {
    const std::string_view piece = trimmed(text.substr(begin, end - begin));
    if (!piece.empty()) pieces.push_back(piece);
    begin = end + 1;
  };
  for (std::size_t i = 0; i < text.size(); ++i) {
    if (text[i] == '\\' && in_quotes) {
      ++i;
    } else if (text[i] == '"') {
      in_quotes = !in_quotes;
    } else if (text[i] == separator && !in_quotes) {
      take(i);
    }
  }
  take(text.size());
  return pieces;
}

}  // namespace bandwright
