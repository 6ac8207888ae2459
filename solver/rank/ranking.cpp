#include "solver/rank/ranking.h"

#include <algorithm>
#include <numeric>
#include <set>

namespace bandwright {
namespace {

bool better_margin(const RankKey& a, const RankKey& b) {
  if (a.margin_db != b.margin_db) return a.margin_db > b.margin_db;
  return a.parts < b.parts;
}

bool better(const RankKey& a, const RankKey& b, RankBy by) {
  if (by == RankBy::yield && a.yield != b.yield) return a.yield > b.yield;
  if (by == RankBy::part_count) {
    if (a.meets_goals != b.meets_goals) return a.meets_goals;
    if (a.meets_goals && a.parts != b.parts) return a.parts < b.parts;
  }
  return better_margin(a, b);
}

}  // namespace

std::vector<std::size_t> rank(const std::vector<RankKey>& keys, RankBy by) {
  std::vector<std::size_t> order(keys.size());
  std::iota(order.begin(), order.end(), 0);
  std::stable_sort(order.begin(), order.end(),
                   [&](std::size_t a, std::size_t b) { return better(keys[a], keys[b], by); });
  std::set<int> shown;
  std::vector<std::size_t> first, again;
  for (std::size_t i : order) (shown.insert(keys[i].topology).second ? first : again).push_back(i);
  first.insert(first.end(), again.begin(), again.end());
  return first;
}

}  // namespace bandwright
