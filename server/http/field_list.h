// Small readings of header text: case, surrounding space, comma-separated lists (RFC 9110, 5.6).
#pragma once

#include <string>
#include <string_view>

namespace bandwright {

std::string ascii_lower(std::string_view text);
// Without leading and trailing spaces and tabs.
std::string_view trim_spaces(std::string_view text);
// Whether a comma-separated list holds `lower_case_member`, in any case.
bool list_contains(std::string_view list, std::string_view lower_case_member);

}  // namespace bandwright
