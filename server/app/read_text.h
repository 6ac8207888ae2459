// Whole files as text.
#pragma once

#include <string>

namespace bandwright {

// "-" is standard input. Throws std::runtime_error if it cannot be read or passes 64 MiB.
std::string read_text_file(const std::string& name);

}  // namespace bandwright
