#include "server/api/digest.h"

#include <openssl/evp.h>

#include <stdexcept>

namespace bandwright {

std::string sha256_text(std::string_view bytes) {
  unsigned char digest[EVP_MAX_MD_SIZE];
  unsigned int size = 0;
  if (EVP_Digest(bytes.data(), bytes.size(), digest, &size, EVP_sha256(), nullptr) != 1) {
    throw std::runtime_error("SHA-256 is not available");
  }
  constexpr std::string_view kHex = "0123456789abcdef";
  std::string text = "sha256:";
  for (unsigned int i = 0; i < size; ++i) {
    text += kHex[digest[i] >> 4];
    text += kHex[digest[i] & 15];
  }
  return text;
}

}  // namespace bandwright
