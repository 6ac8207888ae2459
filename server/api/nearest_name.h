// "Did you mean": the known name nearest to an unknown one.
#pragma once

#include <span>
#include <string>
#include <string_view>

namespace bandwright {

// Insertions, deletions, substitutions and swaps of neighbours that turn `a` into `b` (the optimal
// string alignment distance), blind to case.
int edit_distance(std::string_view a, std::string_view b);

// The nearest of `names` if it is near enough to have been meant, else empty.
std::string nearest_name(std::string_view name, std::span<const std::string_view> names);

}  // namespace bandwright
