#include <algorithm>

#include "solver/base/parallel.h"
#include "solver/rank/ranking.h"
#include "solver/search/race.h"
#include "solver/solver/candidates.h"
#include "solver/solver/describe.h"
#include "solver/solver/grids.h"
#include "solver/solver/problem_limit.h"
#include "solver/solver/solver.h"

namespace bandwright {
namespace {

// Shares of the progress bar at which each stage ends.
constexpr double kSearched = 0.6, kChosen = 0.9;
constexpr int kResponsePoints = 201;

SweepRange goal_span(const std::vector<Goal>& goals) {
  SweepRange sweep{goals[0].from_hz, goals[0].to_hz, kResponsePoints};
  for (const Goal& goal : goals) {
    sweep.from_hz = std::min(sweep.from_hz, goal.from_hz);
    sweep.to_hz = std::max(sweep.to_hz, goal.to_hz);
  }
  return sweep;
}

StopReason stop_reason(EndCause cause, bool converged) {
  switch (cause) {
    case EndCause::stopped:
      return StopReason::stopped;
    case EndCause::cancelled:
      return StopReason::cancelled;
    case EndCause::deadline:
      return StopReason::budget;
    case EndCause::none:
      break;
  }
  return converged ? StopReason::converged : StopReason::budget;
}

// The candidates to show, best first.
std::vector<Candidate> ranked_candidates(const Problem& problem, const CandidateSet& set) {
  std::vector<RankKey> keys;
  for (const Candidate& c : set.candidates) {
    keys.push_back({c.topology, c.choosing_yield, c.margin_db, c.margin_db >= 0,
                    static_cast<int>(c.values.size())});
  }
  std::vector<Candidate> out;
  for (std::size_t i : rank(keys, problem.rank_by)) {
    if (static_cast<int>(out.size()) == problem.search.designs) break;
    out.push_back(set.candidates[i]);
  }
  return out;
}

Ranking ranking_of(const Problem& problem, const Candidate& candidate, const Design& design) {
  switch (problem.rank_by) {
    case RankBy::yield:
      if (design.yield) return {RankBy::yield, candidate.choosing_yield};
      break;
    case RankBy::part_count:
      return {RankBy::part_count, static_cast<double>(candidate.values.size())};
    case RankBy::margin:
      break;
  }
  return {RankBy::margin, design.margin_db};
}

std::vector<Design> describe_all(const Problem& problem, const std::vector<Candidate>& candidates,
                                 int threads) {
  const SweepRange sweep = goal_span(problem.goals);
  std::vector<Design> designs(candidates.size());
  parallel_for(threads, candidates.size(), [&](std::size_t i) {
    const Candidate& c = candidates[i];
    designs[i] = describe(problem, problem.topologies[c.topology], c.values, sweep, 1);
    designs[i].ideal = Ideal{c.ideal_margin_db, c.ideal};
    designs[i].agreeing_starts = c.agreeing_starts;
    designs[i].ranking = ranking_of(problem, c, designs[i]);
  });
  return designs;
}

void add_warnings(const Problem& problem, const CandidateSet& set, Report& report) {
  if (report.limit) report.warnings = limit_warnings(problem, *report.limit);
  const bool any_met = std::any_of(report.designs.begin(), report.designs.end(),
                                   [](const Design& design) { return design.meets_goals; });
  if (!any_met) {
    report.warnings.push_back(
        "No design meets every goal; the ones shown come nearest. More elements, wider value "
        "ranges, finer values or a lower goal may help.");
  }
  if (!set.all_exact && report.reproducible) {
    report.warnings.push_back(
        "The preferred values of some topologies were chosen near the continuous optimum, not from "
        "every combination, because there are too many combinations.");
  }
  if (report.stop_reason == StopReason::budget && report.reproducible) {
    report.warnings.push_back(
        "The best values were not found again from enough independent starts; a higher search "
        "effort may find better ones.");
  }
}

}  // namespace

std::string_view stop_reason_name(StopReason reason) {
  switch (reason) {
    case StopReason::converged:
      return "converged";
    case StopReason::budget:
      return "budget";
    case StopReason::stopped:
      return "stopped";
    case StopReason::cancelled:
      break;
  }
  return "cancelled";
}

Report solve(const Problem& problem, int threads, RunControl& control) {
  Report report;
  const PointSet points(problem, goal_grid(problem.goals, 1));
  const SearchOutcome searched = search_topologies(problem, points, threads, control);
  control.set_fraction(kSearched);
  const CandidateSet set = choose_candidates(problem, searched, threads, control);
  control.set_fraction(kChosen);
  const EndCause cause = control.cause();
  report.designs = describe_all(problem, ranked_candidates(problem, set), threads);
  report.unmatched = describe_unmatched(problem);
  if (problem.wants_limit && cause == EndCause::none)
    report.limit = problem_limit(problem, threads);
  report.stop_reason = stop_reason(cause, searched.converged);
  report.reproducible = cause == EndCause::none;
  report.evaluations = searched.evaluations + set.evaluations;
  report.topologies = static_cast<int>(problem.topologies.size());
  report.topologies_done = control.progress().topologies_done;
  add_warnings(problem, set, report);
  control.set_fraction(1);
  return report;
}

Design analyse(const Problem& problem, const Values& values, const SweepRange& sweep, int threads) {
  return describe(problem, problem.topologies.front(), values, sweep, threads);
}

}  // namespace bandwright
