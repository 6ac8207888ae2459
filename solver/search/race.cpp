#include "solver/search/race.h"

#include <algorithm>
#include <cmath>
#include <memory>

#include "solver/base/parallel.h"
#include "solver/search/growth.h"
#include "solver/search/topology_search.h"

namespace bandwright {
namespace {

// Work for one topology with d open values at normal effort: spread starts, then kicks.
struct Plan {
  int starts;
  int kicks;
};
constexpr Plan kPlans[] = {{1, 0},    {4, 0},    {8, 2},     {16, 4},   {48, 12},
                           {112, 32}, {240, 96}, {320, 160}, {400, 240}};
// Share of the plan spent after each round, and how far behind the leader a topology may be to
// take part in the next.
constexpr double kShares[] = {0.25, 0.5, 1.0};
constexpr double kGapsDb[] = {8, 5, 3};
// More topologies than this are also cut to the better quarter after each round.
constexpr std::size_t kManyTopologies = 64;
// The leaders go on while fewer starts than this agree, for at most this many plans more.
constexpr int kWantedAgreement = 3;
constexpr int kExtraPlans = 3;
constexpr double kLeaderGapDb = 0.3;

double effort_factor(Effort effort) {
  switch (effort) {
    case Effort::quick:
      return 0.4;
    case Effort::normal:
      return 1;
    case Effort::thorough:
      break;
  }
  return 4;
}

Plan plan_for(const Topology& topology, Effort effort) {
  const int d = std::min(topology.free_count(), 8);
  const double factor = d == 0 ? 1 : effort_factor(effort);
  return {static_cast<int>(std::ceil(kPlans[d].starts * factor)),
          static_cast<int>(std::ceil(kPlans[d].kicks * factor))};
}

// A topology's random numbers depend on what it is, not on where it stands in the list, so that a
// wider template searches the old topologies just as before.
std::uint64_t topology_seed(const Topology& topology, std::uint64_t seed) {
  std::uint64_t hash = mix64(seed + 0x5DEECE66Dull);
  for (const Slot& slot : topology.slots) {
    hash = mix64(hash ^ (static_cast<std::uint64_t>(slot.place) * 16 +
                         static_cast<std::uint64_t>(slot.kind) + 1));
  }
  return hash;
}

class Race {
 public:
  Race(const Problem& problem, const PointSet& points, int threads, RunControl& control)
      : problem_(problem), points_(points), threads_(threads), control_(control) {
    searches_.resize(problem.topologies.size());
    for (std::size_t i = 0; i < searches_.size(); ++i) field_.push_back(static_cast<int>(i));
    control.set_topologies(static_cast<int>(searches_.size()));
  }

  SearchOutcome run() {
    first_look();
    for (std::size_t round = 0; round < std::size(kShares); ++round) {
      run_round(kShares[round]);
      control_.set_fraction(0.2 * (round + 1));
      thin_out(kGapsDb[round]);
    }
    grow_from_smaller();
    const bool converged = settle_leaders();
    return outcome(converged);
  }

 private:
  TopologySearch& search(int i) {
    if (!searches_[i]) {
      const Topology& topology = problem_.topologies[i];
      searches_[i] = std::make_unique<TopologySearch>(
          topology, points_, topology_seed(topology, problem_.search.seed));
    }
    return *searches_[i];
  }

  // Does `work` for every topology in the field, on all threads.
  template <class Work>
  void for_each(const Work& work) {
    parallel_for(threads_, field_.size(), [&](std::size_t k) {
      const int i = field_[k];
      // The very first topology is always looked at, so that there is a best so far.
      if (control_.should_end() && !(k == 0 && !searches_[i])) return;
      TopologySearch& s = search(i);
      const std::uint64_t before = s.evaluations();
      work(i);
      control_.add_evaluations(s.evaluations() - before);
      control_.offer_margin_db(s.best_margin_db());
    });
  }

  void first_look() {
    for_each([&](int i) {
      TopologySearch& s = *searches_[i];
      s.run(std::min(4, plan(s).starts), 0, TopologySearch::kNone, control_);
      control_.topology_done();
    });
    if (field_.size() > kManyTopologies) thin_out(kGapsDb[0]);
  }

  Plan plan(const TopologySearch& s) const {
    return plan_for(s.topology(), problem_.search.effort);
  }

  void run_round(double share) {
    for_each([&](int i) {
      TopologySearch& s = *searches_[i];
      const Plan whole = plan(s);
      const int starts = static_cast<int>(std::ceil(whole.starts * share)) - s.starts();
      const int kicks = share == 1.0 ? whole.kicks : 0;
      s.run(std::max(0, starts), kicks, TopologySearch::kNone, control_);
    });
  }

  double leader_db() const {
    double best = TopologySearch::kNone;
    for (const auto& s : searches_) {
      if (s) best = std::max(best, s->best_margin_db());
    }
    return best;
  }

  void thin_out(double gap_db) {
    const double leader = leader_db();
    std::erase_if(field_, [&](int i) {
      return !searches_[i] || searches_[i]->best_margin_db() < leader - gap_db;
    });
    if (field_.size() <= kManyTopologies) return;
    std::stable_sort(field_.begin(), field_.end(), [&](int a, int b) {
      return searches_[a]->best_margin_db() > searches_[b]->best_margin_db();
    });
    field_.resize(std::max(kManyTopologies, field_.size() / 4));
    std::sort(field_.begin(), field_.end());
  }

  // Each topology still in the field climbs once more from every smaller one that it contains.
  // The starts are taken before any of them is used, so that the order of work does not matter.
  void grow_from_smaller() {
    std::vector<std::vector<Values>> starts(searches_.size());
    for (int i : field_) starts[i] = smaller_optima(i);
    for_each([&](int i) {
      for (const Values& start : starts[i]) searches_[i]->run_from(start);
    });
  }

  std::vector<Values> smaller_optima(int larger) const {
    std::vector<Values> out;
    const Topology& topology = problem_.topologies[larger];
    for (int slot = 0; slot < static_cast<int>(topology.slots.size()); ++slot) {
      if (topology.slots[slot].fixed()) continue;
      const Topology smaller = one_less(topology, slot);
      for (std::size_t k = 0; k < searches_.size(); ++k) {
        if (!searches_[k] || !searches_[k]->found()) continue;
        if (!same_slots(problem_.topologies[k], smaller)) continue;
        out.push_back(grown(topology, slot, searches_[k]->best_values()));
      }
    }
    return out;
  }

  bool leader_agreed() const {
    const double leader = leader_db();
    return std::any_of(field_.begin(), field_.end(), [&](int i) {
      const TopologySearch& s = *searches_[i];
      return s.best_margin_db() == leader &&
             (s.space().dimension() == 0 || s.agreeing_starts() >= kWantedAgreement);
    });
  }

  bool settle_leaders() {
    thin_out(kLeaderGapDb);
    for (int extra = 0; extra < kExtraPlans && !leader_agreed(); ++extra) {
      for_each([&](int i) {
        TopologySearch& s = *searches_[i];
        if (s.agreeing_starts() >= kWantedAgreement) return;
        s.run(plan(s).starts, plan(s).kicks, TopologySearch::kNone, control_);
      });
      if (control_.should_end()) break;
    }
    return leader_agreed() && control_.cause() == EndCause::none;
  }

  SearchOutcome outcome(bool converged) const {
    SearchOutcome out;
    out.converged = converged;
    for (std::size_t i = 0; i < searches_.size(); ++i) {
      if (!searches_[i]) continue;
      const TopologySearch& s = *searches_[i];
      out.evaluations += s.evaluations();
      if (!s.found()) continue;
      out.ranked.push_back({static_cast<int>(i), s.best_values(), s.best_margin_db(),
                            s.agreeing_starts(), s.starts()});
    }
    std::stable_sort(out.ranked.begin(), out.ranked.end(),
                     [](const SearchedTopology& a, const SearchedTopology& b) {
                       return a.margin_db > b.margin_db;
                     });
    return out;
  }

  const Problem& problem_;
  const PointSet& points_;
  int threads_;
  RunControl& control_;
  std::vector<std::unique_ptr<TopologySearch>> searches_;  // one for each topology, once begun
  std::vector<int> field_;  // topologies still in the race, in index order
};

}  // namespace

SearchOutcome search_topologies(const Problem& problem, const PointSet& points, int threads,
                                RunControl& control) {
  return Race(problem, points, threads, control).run();
}

}  // namespace bandwright
