#include "server/store/random_id.h"

#include <sys/random.h>

#include <array>
#include <cerrno>
#include <system_error>

namespace bandwright {

std::string random_id(std::string_view prefix) {
  constexpr std::string_view kAlphabet = "abcdefghijklmnopqrstuvwxyz234567";
  std::array<unsigned char, 26> bytes{};
  // Up to 256 bytes come whole; only a signal before the first byte can interrupt the call.
  while (getrandom(bytes.data(), bytes.size(), 0) != static_cast<ssize_t>(bytes.size())) {
    if (errno != EINTR) throw std::system_error(errno, std::generic_category(), "getrandom");
  }
  std::string id(prefix);
  for (unsigned char byte : bytes) id += kAlphabet[byte & 31];
  return id;
}

}  // namespace bandwright
