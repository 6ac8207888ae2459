#include "solver/tolerance/monte_carlo.h"

#include <algorithm>
#include <cmath>
#include <numeric>

#include "solver/base/parallel.h"
#include "solver/rf/ladder.h"

namespace bandwright {
namespace {

constexpr int kChunk = 512;
constexpr int kClasses = 20;

// Boards sorted into kClasses classes by one element's deviation.
double class_variance(const std::vector<int>& order, const std::vector<double>& margins,
                      double total_variance) {
  const std::size_t n = order.size();
  const double mean = std::accumulate(margins.begin(), margins.end(), 0.0) / n;
  double between = 0;
  for (int c = 0; c < kClasses; ++c) {
    const std::size_t from = n * c / kClasses, to = n * (c + 1) / kClasses;
    double sum = 0;
    for (std::size_t k = from; k < to; ++k) sum += margins[order[k]];
    const double d = sum / (to - from) - mean;
    between += (to - from) * d * d;
  }
  const double by_chance = (kClasses - 1.0) / (n - 1.0) * total_variance;
  return between / n - by_chance;
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

double quantile(const std::vector<double>& sorted, double q) {
  const double at = q * (sorted.size() - 1);
  const std::size_t k = static_cast<std::size_t>(at);
  if (k + 1 >= sorted.size()) return sorted.back();
  return sorted[k] + (at - k) * (sorted[k + 1] - sorted[k]);
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
    std::vector<double> deviation(n);
    std::vector<int> order(n);
    for (std::size_t b = 0; b < n; ++b) {
      deviation[b] = boards.deviation(b, static_cast<int>(e));
      order[b] = static_cast<int>(b);
    }
    std::sort(order.begin(), order.end(), [&](int a, int b) {
      return deviation[a] < deviation[b] || (deviation[a] == deviation[b] && a < b);
    });
    shares[e] = std::clamp(class_variance(order, margins, variance) / variance, 0.0, 1.0);
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
  std::vector<double> loss_db(width * count);
  parallel_for(threads, (count + kChunk - 1) / kChunk, [&](std::size_t chunk) {
    Ladder::Scratch scratch = ladder.make_scratch();
    Values values(topology.slots.size());
    const int end = std::min<int>(count, (chunk + 1) * kChunk);
    for (int b = chunk * kChunk; b < end; ++b) {
      boards.draw(b, values.data());
      ladder.point_margins_db(values.data(), loss_db.data() + width * b, scratch);
    }
  });
  ReturnLossBand band;
  std::vector<double> column(count);
  for (std::size_t k = 0; k < frequency_hz.size(); ++k) {
    for (int b = 0; b < count; ++b) column[b] = loss_db[width * b + k];
    std::sort(column.begin(), column.end());
    band.p05_db.push_back(quantile(column, 0.05));
    band.p95_db.push_back(quantile(column, 0.95));
  }
  return band;
}

}  // namespace bandwright
