// The words of the request's options, in the order of their enumerations.
#pragma once

#include <array>
#include <string_view>

#include "solver/rf/problem.h"

namespace bandwright {

inline constexpr std::array<std::string_view, 2> kDistributionWords{"uniform", "normal"};
inline constexpr std::array<std::string_view, 3> kRankWords{"yield", "margin", "part_count"};
inline constexpr std::array<std::string_view, 3> kEffortWords{"quick", "normal", "thorough"};

inline std::string_view distribution_name(Distribution distribution) {
  return kDistributionWords[static_cast<std::size_t>(distribution)];
}

}  // namespace bandwright
