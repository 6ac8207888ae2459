#include "solver/solver/describe.h"

#include <algorithm>
#include <cmath>

#include "solver/rf/response.h"
#include "solver/rf/worst_case.h"
#include "solver/solver/grids.h"
#include "solver/tolerance/monte_carlo.h"
#include "solver/tolerance/wilson.h"

namespace bandwright {
namespace {

constexpr int kStressPoints = 51;
constexpr int kMostBandBoards = 500;
constexpr double kLeastEfficiencyDb = -200;

double floor_db(double ratio) {
  if (std::fabs(ratio - 1) < 1e-12) return 0;  // lossless but for rounding
  return ratio > 0 ? std::max(kLeastEfficiencyDb, 10 * std::log10(ratio)) : kLeastEfficiencyDb;
}

bool inside_band(const Goal& goal) {
  return goal.bound != GoalBound::at_most;
}

// The Monte Carlo grid: even, plus the frequencies where the nominal network is worst.
GoalGrid board_grid(const Problem& problem, const Design& design) {
  GoalGrid grid = goal_grid(problem.goals, kBoardRefine);
  for (std::size_t g = 0; g < grid.size(); ++g) {
    grid[g].push_back(design.goals[g].at_hz);
    std::sort(grid[g].begin(), grid[g].end());
    grid[g].erase(std::unique(grid[g].begin(), grid[g].end()), grid[g].end());
  }
  return grid;
}

void describe_tolerance(const Problem& problem, Design& design, int threads) {
  const int samples = problem.tolerance.samples;
  if (samples <= 0) return;
  const Distribution distribution = problem.tolerance.distribution;
  const Boards boards(design.topology, design.values, distribution, problem.search.seed,
                      kJudgingBatch);
  const PointSet points(problem, board_grid(problem, design));
  std::vector<double> margins =
      board_margins_db(design.topology, boards, points, 0, samples, threads);
  const std::vector<double> shares = variance_shares(design.topology, boards, margins);
  for (std::size_t i = 0; i < shares.size(); ++i) {
    design.sensitivity.push_back({static_cast<int>(i), shares[i]});
  }
  if (has_bounds(problem.goals)) {
    const auto passed =
        std::count_if(margins.begin(), margins.end(), [](double m) { return m >= 0; });
    const Interval interval = wilson_interval(passed, samples);
    design.yield = Yield{static_cast<double>(passed) / samples,
                         interval.low,
                         interval.high,
                         0.95,
                         samples,
                         distribution};
  }
  design.margin_quantiles = MarginQuantiles{quantile(margins, 0.01), quantile(margins, 0.05),
                                            quantile(margins, 0.5), quantile(margins, 0.95)};
  const ReturnLossBand band =
      return_loss_band(design.topology, boards, problem, design.response.frequency_hz,
                       std::min(samples, kMostBandBoards), threads);
  design.response.return_loss_p05_db = band.p05_db;
  design.response.return_loss_p95_db = band.p95_db;
}

void describe_stress(const Problem& problem, Design& design) {
  const int n = static_cast<int>(design.topology.slots.size());
  for (int i = 0; i < n; ++i) design.stress.push_back({i, 0, 0, 0});
  double least_efficiency = 1;
  for (const Goal& goal : problem.goals) {
    const std::vector<double> band = even_grid({goal}, kStressPoints)[0];
    for (const LoadState& load : problem.loads) {
      for (double f : band) {
        const DrivenState state =
            drive(design.topology, design.values, problem.source, load.port, f, problem.drive_w);
        for (int i = 0; i < n; ++i) {
          ElementStress& stress = design.stress[i];
          stress.peak_v = std::max(stress.peak_v, std::abs(state.elements[i].voltage_v));
          stress.peak_a = std::max(stress.peak_a, std::abs(state.elements[i].current_a));
          stress.dissipated_w = std::max(stress.dissipated_w, state.elements[i].dissipated_w);
        }
        if (inside_band(goal) && state.accepted_w > 0) {
          least_efficiency = std::min(least_efficiency, state.load_w / state.accepted_w);
        }
      }
    }
  }
  design.efficiency_db = floor_db(least_efficiency);
}

void describe_response(const Problem& problem, const SweepRange& sweep, Design& design) {
  ResponseTable& out = design.response;
  for (int k = 0; k < sweep.points; ++k) {
    const double t = static_cast<double>(k) / std::max(1, sweep.points - 1);
    const double f =
        k + 1 == sweep.points ? sweep.to_hz : sweep.from_hz + t * (sweep.to_hz - sweep.from_hz);
    const PortResponse r =
        respond(design.topology, design.values, problem.source, problem.loads.front().port, f);
    out.frequency_hz.push_back(f);
    out.return_loss_db.push_back(return_loss_db(std::abs(r.reflection)));
    out.s11_re.push_back(r.reflection.real());
    out.s11_im.push_back(r.reflection.imag());
    out.transducer_gain_db.push_back(floor_db(r.transducer_gain));
  }
}

}  // namespace

bool has_bounds(const std::vector<Goal>& goals) {
  return std::any_of(goals.begin(), goals.end(),
                     [](const Goal& goal) { return goal.bound != GoalBound::best; });
}

void describe_goals(const Problem& problem, Design& design) {
  design.goals.clear();
  design.margin_db = INFINITY;
  design.meets_goals = true;
  for (const Goal& goal : problem.goals) {
    const int points = search_intervals(goal) * kCheckRefine + 1;
    const WorstCase worst = worst_over_band(design.topology, design.values, problem, goal, points);
    const double margin = goal.margin_db(worst.value_db);
    const bool met = goal.bound == GoalBound::best || margin >= 0;
    design.goals.push_back({worst.value_db, worst.at_hz, worst.load, margin, met});
    design.margin_db = std::min(design.margin_db, margin);
    design.meets_goals = design.meets_goals && met;
  }
}

Design describe(const Problem& problem, const Topology& topology, const Values& values,
                const SweepRange& sweep, int threads) {
  Design design;
  design.topology = topology;
  design.values = values;
  describe_goals(problem, design);
  describe_response(problem, sweep, design);
  describe_tolerance(problem, design, threads);
  describe_stress(problem, design);
  return design;
}

Unmatched describe_unmatched(const Problem& problem) {
  const bool any_return_loss =
      std::any_of(problem.goals.begin(), problem.goals.end(), [](const Goal& goal) {
        return goal.quantity == GoalQuantity::return_loss && inside_band(goal);
      });
  Unmatched out{INFINITY, 0};
  for (Goal goal : problem.goals) {
    const bool counts = goal.quantity == GoalQuantity::return_loss && inside_band(goal);
    if (any_return_loss && !counts) continue;
    goal.quantity = GoalQuantity::return_loss;
    goal.bound = GoalBound::best;
    goal.weight = 1;
    const WorstCase worst =
        worst_over_band({}, {}, problem, goal, search_intervals(goal) * kChoiceRefine + 1);
    if (worst.value_db < out.return_loss_db) out = {worst.value_db, worst.at_hz};
  }
  return out;
}

}  // namespace bandwright
