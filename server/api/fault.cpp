#include "server/api/fault.h"

#include <algorithm>

#include "server/api/limits.h"

namespace bandwright {
namespace {

// Characters a URI fragment may hold as they are (RFC 3986 section 3.5).
bool is_fragment_char(char c) {
  if ((c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9')) return true;
  return std::string_view("-._!$&'()*+,;=:@?").find(c) != std::string_view::npos;
}

void append_percent(std::string& out, char c) {
  constexpr std::string_view kHex = "0123456789ABCDEF";
  const auto byte = static_cast<unsigned char>(c);
  out += '%';
  out += kHex[byte >> 4];
  out += kHex[byte & 15];
}

}  // namespace

void Faults::add(Fault fault) {
  // A part that serves several kinds is decoded once for each; its faults are told once.
  const bool told = std::any_of(list_.begin(), list_.end(), [&](const Fault& other) {
    return other.pointer == fault.pointer && other.detail == fault.detail;
  });
  if (told) return;
  if (list_.size() < limits::kFaults) {
    list_.push_back(std::move(fault));
  } else if (list_.size() == limits::kFaults) {
    list_.push_back(
        {"#",
         "more_faults",
         "there are more faults; the first " + std::to_string(limits::kFaults) + " are listed",
         {},
         ""});
  }
}

std::string pointer_child(std::string_view base, std::string_view token) {
  std::string out(base);
  out += '/';
  for (const char c : token) {
    if (c == '~') {
      out += "~0";
    } else if (c == '/') {
      out += "~1";
    } else if (is_fragment_char(c)) {
      out += c;
    } else {
      append_percent(out, c);
    }
  }
  return out;
}

std::string pointer_child(std::string_view base, std::size_t index) {
  return std::string(base) + "/" + std::to_string(index);
}

}  // namespace bandwright
