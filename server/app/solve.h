// `bandwrightd solve`: one request, no server, nothing stored.
#pragma once

#include <string>

namespace bandwright {

// Prints the result on standard output, or the problem document on standard error. Returns the
// exit status. Throws std::runtime_error if the request cannot be read.
int solve(const std::string& file, int threads);

}  // namespace bandwright
