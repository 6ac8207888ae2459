// Yield, margin quantiles, each element's share of the spread, and the response band, by seeded
// Monte Carlo on the ladder kernel.
#pragma once

#include <vector>

#include "solver/rf/points.h"
#include "solver/tolerance/boards.h"

namespace bandwright {

// The worst margin of boards first .. first + count - 1, dB.
std::vector<double> board_margins_db(const Topology& topology, const Boards& boards,
                                     const PointSet& points, std::uint64_t first, int count,
                                     int threads);

// The q-quantile by linear interpolation between order statistics (Hyndman and Fan, Am. Stat. 50,
// 1996, definition 7). `values` is not empty; it is reordered.
double quantile(std::vector<double>& values, double q);

// For each element, the share of the margins' variance between boards that its own deviation
// explains: the variance of the mean margin over classes of equal deviation (first-order index of
// Sobol', 1993, by binning), less what chance alone would give. Between 0 and 1; 0 where nothing
// varies. `margins` belongs to boards 0 .. size - 1.
std::vector<double> variance_shares(const Topology& topology, const Boards& boards,
                                    const std::vector<double>& margins);

// The 5 % and 95 % quantiles of the return loss at each frequency over `count` boards, dB.
struct ReturnLossBand {
  std::vector<double> p05_db, p95_db;
};
ReturnLossBand return_loss_band(const Topology& topology, const Boards& boards,
                                const Problem& problem, const std::vector<double>& frequency_hz,
                                int count, int threads);

}  // namespace bandwright
