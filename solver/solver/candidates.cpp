#include "solver/solver/candidates.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "solver/base/parallel.h"
#include "solver/rf/ladder.h"
#include "solver/rf/worst_case.h"
#include "solver/search/discrete.h"
#include "solver/search/topology_search.h"
#include "solver/solver/describe.h"
#include "solver/solver/grids.h"
#include "solver/tolerance/centre.h"

namespace bandwright {
namespace {

constexpr double kNone = -std::numeric_limits<double>::infinity();
// A searched margin may still rise by this much when it is finished.
constexpr double kUnfinishedDb = 0.3;
// Topologies handled between two looks at the bar: as many as designs are wanted, within these.
// Not a thread count, so that threads change nothing.
constexpr int kLeastBatch = 2, kMostBatch = 8;
// Choices of one topology that centring starts from.
constexpr int kCentreStarts = 16;
constexpr int kCentreBoards = 4000;
constexpr int kRepolish = 3;
// A topology whose best nominal margin is below this cannot yield much: it is not centred.
constexpr double kCentreFromDb = -0.5;

struct Grids {
  PointSet screen, choice, boards;

  explicit Grids(const Problem& problem)
      : screen(problem, spread_order(goal_grid(problem.goals, 1))),
        choice(problem, goal_grid(problem.goals, kChoiceRefine)),
        boards(problem, goal_grid(problem.goals, kBoardRefine)) {}
};

// Finishes the continuous optimum; where the true worst point lies between the grid's points it
// joins the grid and the end is run again.
Polished finish_ideal(const Problem& problem, const Topology& topology, const Values& values) {
  GoalGrid grid = goal_grid(problem.goals, kPolishRefine);
  Polished best{values, kNone, 0};
  for (int round = 0; round < kRepolish; ++round) {
    const PointSet points(problem, grid);
    Polished polished =
        polish(topology, round == 0 ? values : best.values, points, problem.search.seed);
    double true_margin = INFINITY;
    bool hidden = false;
    for (std::size_t g = 0; g < problem.goals.size(); ++g) {
      const Goal& goal = problem.goals[g];
      const WorstCase worst = worst_over_band(topology, polished.values, problem, goal,
                                              search_intervals(goal) * kCheckRefine + 1);
      const double margin = goal.margin_db(worst.value_db);
      true_margin = std::min(true_margin, margin);
      if (margin > polished.margin_db - 2e-3) continue;
      hidden = true;
      grid[g].push_back(worst.at_hz);
    }
    const std::uint64_t evaluations = best.evaluations + polished.evaluations;
    if (true_margin > best.margin_db) best = {polished.values, true_margin, 0};
    best.evaluations = evaluations;
    if (!hidden) break;
  }
  return best;
}

// The nearest offered values to the ideal ones, for a run that ended before any choice was made.
Values nearest_offered(const Topology& topology, const Values& ideal) {
  Values out = ideal;
  for (std::size_t i = 0; i < out.size(); ++i) {
    const Slot& slot = topology.slots[i];
    if (slot.fixed()) continue;
    const std::vector<double> list = offered_values(slot.part, slot.range.min, slot.range.max);
    double nearest = INFINITY;
    for (double value : list) {
      const double distance = std::fabs(std::log(value / ideal[i]));
      if (distance < nearest) out[i] = value;
      nearest = std::min(nearest, distance);
    }
  }
  return out;
}

class Chooser {
 public:
  Chooser(const Problem& problem, const SearchOutcome& searched, int threads, RunControl& control)
      : problem_(problem),
        searched_(searched),
        threads_(threads),
        control_(control),
        grids_(problem),
        centring_(problem.rank_by == RankBy::yield && problem.tolerance.samples > 0 &&
                  has_bounds(problem.goals)) {}

  CandidateSet run() {
    const std::size_t batch = std::clamp(problem_.search.designs, kLeastBatch, kMostBatch);
    for (std::size_t from = 0; from < searched_.ranked.size(); from += batch) {
      const double bar = bar_db();
      if (searched_.ranked[from].margin_db + kUnfinishedDb <= bar) break;
      if (from > 0 && control_.should_end()) break;
      run_batch(from, std::min(from + batch, searched_.ranked.size()), bar);
    }
    return std::move(out_);
  }

 private:
  struct Worked {
    std::vector<Candidate> candidates;
    std::uint64_t evaluations = 0;
    bool exact = true;
  };

  // Topologies whose nominal margin cannot pass this are not wanted any more.
  double bar_db() const {
    const std::size_t wanted = static_cast<std::size_t>(problem_.search.designs);
    if (out_.candidates.size() < wanted) return kNone;
    std::vector<double> margins;
    for (const Candidate& c : out_.candidates) margins.push_back(c.margin_db);
    std::nth_element(margins.begin(), margins.begin() + (wanted - 1), margins.end(),
                     std::greater<>());
    return margins[wanted - 1];
  }

  void run_batch(std::size_t from, std::size_t to, double bar) {
    std::vector<Worked> worked(to - from);
    parallel_for(threads_, to - from, [&](std::size_t k) {
      worked[k] = work(searched_.ranked[from + k], bar);
      control_.add_evaluations(worked[k].evaluations);
    });
    for (Worked& w : worked) {
      out_.evaluations += w.evaluations;
      out_.all_exact = out_.all_exact && w.exact;
      for (Candidate& c : w.candidates) out_.candidates.push_back(std::move(c));
    }
  }

  // One topology: its ideal, its best preferred values, and with centring the best-yielding ones.
  Worked work(const SearchedTopology& searched, double bar) {
    Worked out;
    const Topology& topology = problem_.topologies[searched.index];
    const Polished ideal = finish_ideal(problem_, topology, searched.values);
    out.evaluations += ideal.evaluations;
    if (ideal.margin_db <= bar) return out;
    // Few topologies leave room for several choices of one.
    const int spare = problem_.search.designs / static_cast<int>(searched_.ranked.size());
    const int keep = std::max(1 + spare, centring_ ? kCentreStarts : 1);
    DiscreteOutcome chosen = choose_values(topology, ideal.values, grids_.screen, grids_.choice,
                                           kNone, keep, problem_.search.seed, control_);
    out.evaluations += chosen.evaluations;
    out.exact = chosen.exact;
    if (chosen.best.empty()) {
      chosen.best.push_back({nearest_offered(topology, ideal.values), 0});
      chosen.best[0].margin_db = choice_margin_db(topology, chosen.best[0].values);
    }
    Candidate base{
        searched.index, ideal.values, ideal.margin_db, searched.agreeing_starts, {}, 0, 0};
    if (centring_ && chosen.best[0].margin_db > kCentreFromDb) {
      add_centred(topology, base, chosen.best, out);
    }
    for (int k = 0; k < 1 + spare && k < static_cast<int>(chosen.best.size()); ++k) {
      add_choice(topology, base, chosen.best[k], out);
    }
    return out;
  }

  double choice_margin_db(const Topology& topology, const Values& values) const {
    const Ladder ladder(topology, grids_.choice);
    Ladder::Scratch scratch = ladder.make_scratch();
    return ladder.margin_db(values.data(), scratch);
  }

  CentreRequest centre_request() const {
    return {problem_.tolerance.distribution, problem_.search.seed, kChoosingBatch, kCentreBoards};
  }

  void add_centred(const Topology& topology, Candidate candidate, const std::vector<Choice>& best,
                   Worked& out) {
    std::vector<Values> starts;
    for (const Choice& choice : best) starts.push_back(choice.values);
    const Centred centred = centre(topology, starts, grids_.boards, centre_request(), control_);
    out.evaluations += centred.evaluations;
    candidate.values = centred.values;
    candidate.margin_db = choice_margin_db(topology, centred.values);
    candidate.choosing_yield = centred.score.yield;
    out.candidates.push_back(std::move(candidate));
  }

  void add_choice(const Topology& topology, Candidate candidate, const Choice& choice,
                  Worked& out) {
    for (const Candidate& held : out.candidates) {
      if (held.values == choice.values) return;
    }
    candidate.values = choice.values;
    candidate.margin_db = choice.margin_db;
    if (centring_) {
      // Scored on the same boards as the centred one.
      const CentreRequest request = centre_request();
      candidate.choosing_yield = score_yield(topology, choice.values, grids_.boards, request).yield;
      out.evaluations += request.boards;
    }
    out.candidates.push_back(std::move(candidate));
  }

  const Problem& problem_;
  const SearchOutcome& searched_;
  int threads_;
  RunControl& control_;
  Grids grids_;
  bool centring_;
  CandidateSet out_;
};

}  // namespace

CandidateSet choose_candidates(const Problem& problem, const SearchOutcome& searched, int threads,
                               RunControl& control) {
  return Chooser(problem, searched, threads, control).run();
}

}  // namespace bandwright
