// Names nobody can guess: 26 lower-case base32 characters, 130 bits from the kernel.
#pragma once

#include <string>
#include <string_view>

namespace bandwright {

// `prefix` and 26 characters of a-z, 2-7.
std::string random_id(std::string_view prefix);

}  // namespace bandwright
