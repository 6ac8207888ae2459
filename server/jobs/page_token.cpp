#include "server/jobs/page_token.h"

#include <charconv>
#include <system_error>

namespace bandwright {

namespace {

constexpr std::string_view kPrefix = "pt_";
constexpr int kBase = 36;

}  // namespace

std::string page_token(std::int64_t before) {
  char digits[16];
  const auto end = std::to_chars(digits, digits + sizeof digits, before, kBase).ptr;
  return std::string(kPrefix) + std::string(digits, end);
}

std::optional<std::int64_t> read_page_token(std::string_view token) {
  if (!token.starts_with(kPrefix)) return std::nullopt;
  const std::string_view digits = token.substr(kPrefix.size());
  std::int64_t before = 0;
  const auto [end, error] =
      std::from_chars(digits.data(), digits.data() + digits.size(), before, kBase);
  if (error != std::errc() || before < 1 || page_token(before) != token) return std::nullopt;
  return before;
}

}  // namespace bandwright
