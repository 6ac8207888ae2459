#include "solver/rank/ranking.h"

#include <doctest/doctest.h>

using namespace bandwright;

TEST_CASE("designs are ordered by the wanted figure, distinct topologies first") {
  // topology, yield, margin, meets, parts
  const std::vector<RankKey> keys{{0, 0.90, 0.5, true, 3},
                                  {0, 0.95, 0.2, true, 3},
                                  {1, 0.80, 1.5, true, 4},
                                  {2, 0.10, -0.3, false, 2}};
  using Order = std::vector<std::size_t>;
  CHECK(rank(keys, RankBy::yield) == Order{1, 2, 3, 0});
  CHECK(rank(keys, RankBy::margin) == Order{2, 0, 3, 1});
  CHECK(rank(keys, RankBy::part_count) == Order{0, 2, 3, 1});
}

TEST_CASE("equal yields go to the larger margin, equal margins to fewer parts") {
  const std::vector<RankKey> keys{{0, 1, 0.5, true, 4}, {1, 1, 0.7, true, 4}, {2, 1, 0.7, true, 3}};
  CHECK(rank(keys, RankBy::yield) == std::vector<std::size_t>{2, 1, 0});
}
