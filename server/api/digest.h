// The digest that names a request.
#pragma once

#include <string>
#include <string_view>

namespace bandwright {

// "sha256:" and 64 hexadecimal digits.
std::string sha256_text(std::string_view bytes);

}  // namespace bandwright
