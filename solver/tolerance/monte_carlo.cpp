#include "solver/tolerance/monte_carlo.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <numeric>

#include "solver/base/parallel.h"
#include "solver/rf/ladder.h"

namespace bandwright {
namespace {

constexpr int kChunk = 512;
constexpr int kClasses = 20;

// The variance between the means of classes of equal probability of one element's deviation, less
// what chance alone gives.
double class_variance(const Boards& boards, int element, const std::vector<double>& margins,
                      double mean, double total_variance) {
  std::array<double, kClasses> sum{};
  std::array<double, kClasses> count{};
  for (std::size_t b = 0; b < margins.size(); ++b) {
    const int c = static_cast<int>(kClasses * boards.deviation_share(b, element));
    sum[c] += margins[b];
    count[c] += 1;
  }
  double between = 0;
  for (int c = 0; c < kClasses; ++c) {
    if (count[c] == 0) continue;
    const double d = sum[c] / count[c] - mean;
    between += count[c] * d * d;
  }
  const double n = static_cast<double>(margins.size());
  return between / n - (kClasses - 1) / (n - 1) * total_variance;
}

}  // namespace

std::vector<double> board_margins_db(const Topology& topology, const Boards& boards,
                                     const PointSet& points, std::uint64_t first, int count,
                                     int threads) {
  const Ladder ladder(topology, points);
  std::vector<double> margins(count);
  const std::size_t chunks = (count + kChunk - 1) / kChunk;
  parallel_for(threads, chunks, [&](std::size_t chunk) {
    Ladder::Scratch scratch = ladder.make_scratch();
    Values values(topology.slots.size());
    const int end = std::min<int>(count, (chunk + 1) * kChunk);
    for (int b = chunk * kChunk; b < end; ++b) {
      boards.draw(first + b, values.data());
      margins[b] = ladder.margin_db(values.data(), scratch);
    }
  });
  return margins;
}

double quantile(std::vector<double>& values, double q) {
  const double at = q * (values.size() - 1);
  const std::size_t k = static_cast<std::size_t>(at);
  const auto middle = values.begin() + k;
  std::nth_element(values.begin(), middle, values.end());
  if (k + 1 == values.size()) return *middle;
  const double next = *std::min_element(middle + 1, values.end());
  return *middle + (at - k) * (next - *middle);
}

std::vector<double> variance_shares(const Topology& topology, const Boards& boards,
                                    const std::vector<double>& margins) {
  const std::size_t n = margins.size();
  std::vector<double> shares(topology.slots.size(), 0.0);
  if (n < 4 * kClasses) return shares;
  const double mean = std::accumulate(margins.begin(), margins.end(), 0.0) / n;
  double variance = 0;
  for (double m : margins) variance += (m - mean) * (m - mean);
  variance /= n;
  if (!(variance > 1e-18)) return shares;
  for (std::size_t e = 0; e < shares.size(); ++e) {
    const double between = class_variance(boards, static_cast<int>(e), margins, mean, variance);
    shares[e] = std::clamp(between / variance, 0.0, 1.0);
  }
  return shares;
}

ReturnLossBand return_loss_band(const Topology& topology, const Boards& boards,
                                const Problem& problem, const std::vector<double>& frequency_hz,
                                int count, int threads) {
  // One goal over all frequencies whose margin is the return loss itself, in the first load state.
  Problem view = problem;
  view.loads = {problem.loads.front()};
  view.goals = {Goal{GoalQuantity::return_loss, GoalBound::best, frequency_hz.front(),
                     frequency_hz.back(), 0, 1}};
  const PointSet points(view, {frequency_hz});
  const Ladder ladder(topology, points);
  const std::size_t width = points.points;
  // Reflected power, one row for each frequency.
  std::vector<double> reflected(width * count);
  parallel_for(threads, (count + kChunk - 1) / kChunk, [&](std::size_t chunk) {
    Ladder::Scratch scratch = ladder.make_scratch();
    Values values(topology.slots.size());
    const int end = std::min<int>(count, (chunk + 1) * kChunk);
    for (int b = chunk * kChunk; b < end; ++b) {
      boards.draw(b, values.data());
      ladder.evaluate_points(values.data(), scratch);
      for (std::size_t k = 0; k < width; ++k) reflected[k * count + b] = scratch.badness[k];
    }
  });
  ReturnLossBand band;
  std::vector<double> row(count);
  const auto loss_db = [](double power) { return return_loss_db(std::sqrt(std::max(power, 0.0))); };
  for (std::size_t k = 0; k < frequency_hz.size(); ++k) {
    std::copy_n(reflected.begin() + k * count, count, row.begin());
    band.p95_db.push_back(loss_db(quantile(row, 0.05)));
    band.p05_db.push_back(loss_db(quantile(row, 0.95)));
  }
  return band;
}

}  // namespace bandwright
