#include "server/api/nearest_name.h"

#include <algorithm>
#include <cctype>
#include <vector>

namespace bandwright {
namespace {

// Longer words are not compared: no known name is near them, and the table grows with the product.
constexpr std::size_t kLongestCompared = 64;

bool same(char a, char b) {
  return std::tolower(static_cast<unsigned char>(a)) == std::tolower(static_cast<unsigned char>(b));
}

}  // namespace

int edit_distance(std::string_view a, std::string_view b) {
  std::vector<std::vector<int>> cost(a.size() + 1, std::vector<int>(b.size() + 1));
  for (std::size_t i = 0; i <= a.size(); ++i) cost[i][0] = static_cast<int>(i);
  for (std::size_t j = 0; j <= b.size(); ++j) cost[0][j] = static_cast<int>(j);
  for (std::size_t i = 1; i <= a.size(); ++i) {
    for (std::size_t j = 1; j <= b.size(); ++j) {
      const int change = same(a[i - 1], b[j - 1]) ? 0 : 1;
      cost[i][j] = std::min({cost[i - 1][j] + 1, cost[i][j - 1] + 1, cost[i - 1][j - 1] + change});
      if (i > 1 && j > 1 && same(a[i - 1], b[j - 2]) && same(a[i - 2], b[j - 1])) {
        cost[i][j] = std::min(cost[i][j], cost[i - 2][j - 2] + 1);
      }
    }
  }
  return cost[a.size()][b.size()];
}

std::string nearest_name(std::string_view name, std::span<const std::string_view> names) {
  if (name.empty() || name.size() > kLongestCompared) return "";
  std::string_view best;
  int least = 0;
  for (const std::string_view candidate : names) {
    const int distance = edit_distance(name, candidate);
    if (best.empty() || distance < least) {
      best = candidate;
      least = distance;
    }
  }
  const int near_enough = std::max<int>(1, static_cast<int>(best.size()) / 3);
  // A word that is the beginning of exactly what is known ("tolerance" of "tolerance_percent").
  const auto begins = [name](std::string_view candidate) { return candidate.starts_with(name); };
  if (!best.empty() && least <= near_enough) return std::string(best);
  if (name.size() >= 3 && std::count_if(names.begin(), names.end(), begins) == 1) {
    return std::string(*std::find_if(names.begin(), names.end(), begins));
  }
  return "";
}

}  // namespace bandwright
