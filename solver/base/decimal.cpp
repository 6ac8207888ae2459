#include "solver/base/decimal.h"

#include <charconv>
#include <cmath>
#include <string>

namespace bandwright {
namespace {

// The whole of `text` as a T, without spaces, "inf" or "nan"; nothing if it is anything else.
template <class T>
std::optional<T> whole(std::string_view text) {
  T value{};
  const auto read = std::from_chars(text.data(), text.data() + text.size(), value);
  if (read.ec != std::errc{} || read.ptr != text.data() + text.size()) return std::nullopt;
  return value;
}

}  // namespace

std::optional<double> read_decimal(std::string_view text, int shift) {
  if (text.starts_with('+')) {
    text.remove_prefix(1);
    if (text.starts_with('-')) return std::nullopt;
  }
  const std::optional<double> plain = whole<double>(text);
  if (plain && !std::isfinite(*plain)) return std::nullopt;
  if (shift == 0 || (plain && *plain == 0)) return plain;

  const std::size_t mark = text.find_first_of("eE");
  long exponent = 0;
  if (mark != std::string_view::npos) {
    std::string_view digits = text.substr(mark + 1);
    if (digits.starts_with('+')) digits.remove_prefix(1);
    const std::optional<long> read = whole<long>(digits);
    // An exponent this large is out of range whatever the shift; adding to it could overflow.
    if (!read || *read > 1'000'000 || *read < -1'000'000) return std::nullopt;
    exponent = *read;
  }
  const std::optional<double> value =
      whole<double>(std::string(text.substr(0, mark)) + "e" + std::to_string(exponent + shift));
  if (value && !std::isfinite(*value)) return std::nullopt;
  return value;
}

}  // namespace bandwright
