// Reading the values of header fields: lists, parameters and quoted strings (RFC 9110 section 5.6).
#pragma once

#include <string_view>
#include <vector>

namespace bandwright {

// Without spaces and tabs at its ends.
std::string_view trimmed(std::string_view text);
bool equal_ignoring_case(std::string_view a, std::string_view b);
// Without the quotes around it, if it has them. No escapes are resolved.
std::string_view unquoted(std::string_view text);
// The trimmed, non-empty pieces between separators; none inside quotes counts.
std::vector<std::string_view> split_list(std::string_view text, char separator);

}  // namespace bandwright
