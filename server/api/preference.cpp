#include "server/api/preference.h"

#include <algorithm>
#include <charconv>

#include "server/api/field_value.h"
#include "server/api/limits.h"

namespace bandwright {
namespace {

// Seconds from `digits`, capped; nothing if they are not all digits.
std::optional<int> seconds_from(std::string_view digits) {
  if (digits.empty() || digits.find_first_not_of("0123456789") != std::string_view::npos) {
    return std::nullopt;
  }
  int seconds = 0;
  const auto [end, error] = std::from_chars(digits.data(), digits.data() + digits.size(), seconds);
  if (error == std::errc::result_out_of_range) return limits::kWaitSeconds;
  return std::min(seconds, limits::kWaitSeconds);
}

}  // namespace

std::optional<int> preferred_wait_s(const RequestHead& head) {
  for (const HeaderField& field : head.headers) {
    if (field.name != "prefer") continue;
    for (const std::string_view preference : split_list(field.value, ',')) {
      const std::string_view first = trimmed(preference.substr(0, preference.find(';')));
      const std::size_t equals = first.find('=');
      if (!equal_ignoring_case(trimmed(first.substr(0, equals)), "wait")) continue;
      if (equals == std::string_view::npos) return std::nullopt;
      const auto seconds = seconds_from(unquoted(trimmed(first.substr(equals + 1))));
      return seconds && *seconds > 0 ? seconds : std::nullopt;
    }
  }
  return std::nullopt;
}

}  // namespace bandwright
