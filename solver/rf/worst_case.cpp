#include "solver/rf/worst_case.h"

#include <algorithm>
#include <cmath>
#include <vector>

#include "solver/rf/points.h"
#include "solver/rf/response.h"

namespace bandwright {
namespace {

// Local extremes within this of the worst sample are followed between the samples.
constexpr double kFollowDb = 0.5;
constexpr int kGoldenSteps = 24;
// A gain of nothing is reported as this, so that no answer holds an infinity.
constexpr double kNoGainDb = -200;

// Minimises `f` on [a, b]; returns the best argument seen.
template <class F>
double golden_section(const F& f, double a, double b) {
  constexpr double kRatio = 0.6180339887498949;
  double x1 = b - kRatio * (b - a), x2 = a + kRatio * (b - a);
  double f1 = f(x1), f2 = f(x2);
  for (int i = 0; i < kGoldenSteps; ++i) {
    if (f1 < f2) {
      b = x2;
      x2 = x1;
      f2 = f1;
      x1 = b - kRatio * (b - a);
      f1 = f(x1);
    } else {
      a = x1;
      x1 = x2;
      f1 = f2;
      x2 = a + kRatio * (b - a);
      f2 = f(x2);
    }
  }
  return f1 < f2 ? x1 : x2;
}

}  // namespace

double goal_value_db(const Topology& topology, const Values& values, const OnePort& source,
                     const OnePort& load, const Goal& goal, double frequency_hz) {
  const PortResponse r = respond(topology, values, source, load, frequency_hz);
  if (goal.quantity == GoalQuantity::return_loss) return return_loss_db(std::abs(r.reflection));
  if (!(r.transducer_gain > 0)) return kNoGainDb;
  return std::max(kNoGainDb, 10 * std::log10(r.transducer_gain));
}

WorstCase worst_over_band(const Topology& topology, const Values& values, const Problem& problem,
                          const Goal& goal, int points) {
  const std::vector<double> grid = even_grid({goal}, points)[0];
  WorstCase worst;
  double worst_margin = INFINITY;
  for (std::size_t l = 0; l < problem.loads.size(); ++l) {
    const OnePort& load = problem.loads[l].port;
    const auto value = [&](double f) {
      return goal_value_db(topology, values, problem.source, load, goal, f);
    };
    const auto margin = [&](double f) { return goal.margin_db(value(f)); };
    const auto offer = [&](double f, double m) {
      if (!(m < worst_margin)) return;
      worst_margin = m;
      worst = {value(f), f, static_cast<int>(l)};
    };
    std::vector<double> margins;
    for (double f : grid) margins.push_back(margin(f));
    for (std::size_t k = 0; k < grid.size(); ++k) offer(grid[k], margins[k]);
    for (std::size_t k = 1; k + 1 < grid.size(); ++k) {
      const bool lowest = margins[k] <= margins[k - 1] && margins[k] <= margins[k + 1];
      if (!lowest || margins[k] > worst_margin + kFollowDb) continue;
      const double f = golden_section(margin, grid[k - 1], grid[k + 1]);
      offer(f, margin(f));
    }
  }
  return worst;
}

}  // namespace bandwright
