#include "solver/solver/problem_limit.h"

#include <cmath>
#include <cstdio>

#include "solver/base/parallel.h"

namespace bandwright {
namespace {

// Beside a job's designs the last tenth of a dB is not worth more time than the search takes.
constexpr LimitOptions kInPassing{2, 0.05};

bool asks_for_match(const Goal& goal) {
  return goal.bound != GoalBound::at_most;
}

std::string decibels(double value) {
  char text[32];
  std::snprintf(text, sizeof text, "%.2f dB", value);
  return text;
}

}  // namespace

std::optional<MatchLimit> problem_limit(const Problem& problem, int threads) {
  std::vector<BandRange> bands;
  for (const Goal& goal : problem.goals) {
    if (asks_for_match(goal) && goal.from_hz < goal.to_hz) {
      bands.push_back({goal.from_hz, goal.to_hz});
    }
  }
  if (bands.empty()) return std::nullopt;
  std::vector<MatchLimit> limits(problem.loads.size());
  parallel_for(threads, limits.size(), [&](std::size_t i) {
    limits[i] = match_limit(problem.source, problem.loads[i].port, bands, kInPassing);
  });
  MatchLimit least = limits.front();
  for (const MatchLimit& limit : limits) {
    if (limit.return_loss_db < least.return_loss_db) least = limit;
  }
  // Serving several states with one network can only be harder.
  if (limits.size() > 1) least.tight = false;
  return least;
}

std::vector<std::string> limit_warnings(const Problem& problem, const MatchLimit& limit) {
  std::vector<std::string> out;
  for (const Goal& goal : problem.goals) {
    if (goal.bound != GoalBound::at_least || goal.from_hz == goal.to_hz) continue;
    const bool gain = goal.quantity == GoalQuantity::transducer_gain;
    const double most = gain ? limit.gain_db : limit.return_loss_db;
    if (goal.bound_db <= most) continue;
    out.push_back(std::string("The goal of ") + decibels(goal.bound_db) +
                  (gain ? " transducer gain is " : " return loss is ") +
                  decibels(goal.bound_db - most) + " beyond the limit of " + decibels(most) +
                  (gain ? ": no passive network of any size can meet it."
                        : ": no lossless network of any size can meet it; losses can, at the cost "
                          "of efficiency."));
  }
  return out;
}

}  // namespace bandwright
