#include "solver/search/discrete.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

#include "solver/rf/ladder.h"
#include "solver/rf/pivot_kernel.h"
#include "solver/search/topology_search.h"

namespace bandwright {
namespace {

// Combinations of all lists but the pivot's that are enumerated at most.
constexpr double kMostCombinations = 3e6;
// How often a running enumeration looks whether to end.
constexpr std::uint64_t kPollEvery = 4096;
constexpr int kFittedCombinations = 24;

bool any_value(const Slot& slot) {
  return !slot.fixed() && std::holds_alternative<AnyValue>(slot.part.values);
}

// The values to try for each slot, increasing.
std::vector<std::vector<double>> candidate_lists(const Topology& topology, const Values& ideal) {
  std::vector<std::vector<double>> lists;
  for (std::size_t i = 0; i < topology.slots.size(); ++i) {
    const Slot& slot = topology.slots[i];
    if (slot.fixed() || any_value(slot)) {
      lists.push_back({slot.fixed() ? slot.range.min : ideal[i]});
    } else {
      lists.push_back(offered_values(slot.part, slot.range.min, slot.range.max));
    }
  }
  return lists;
}

// Keeps the `most` values nearest to `centre` on a log scale.
void cut_to_nearest(std::vector<double>& list, double centre, std::size_t most) {
  if (list.size() <= most) return;
  const auto far = [&](double v) { return std::fabs(std::log(v / centre)); };
  std::stable_sort(list.begin(), list.end(), [&](double a, double b) { return far(a) < far(b); });
  list.resize(most);
  std::sort(list.begin(), list.end());
}

// Cuts the longest enumerated lists until their product is in bounds; returns whether it cut.
bool cut_lists(std::vector<std::vector<double>>& lists, const Values& ideal) {
  std::size_t longest = 0;
  for (std::size_t i = 1; i < lists.size(); ++i) longest = std::max(longest, lists[i].size());
  const auto product = [&](std::size_t cap) {
    double out = 1;
    for (std::size_t i = 1; i < lists.size(); ++i) out *= std::min(cap, lists[i].size());
    return out;
  };
  std::size_t cap = longest;
  while (cap > 1 && product(cap) > kMostCombinations) --cap;
  if (cap == longest) return false;
  for (std::size_t i = 1; i < lists.size(); ++i) cut_to_nearest(lists[i], ideal[i], cap);
  return true;
}

// The best choices so far, best first; equal margins keep the order in which they were found.
class BestChoices {
 public:
  BestChoices(int keep, double floor_db) : keep_(keep), floor_db_(floor_db) {}

  // What a newcomer must beat.
  double bar_db() const {
    return static_cast<int>(held_.size()) < keep_ ? floor_db_ : held_.back().margin_db;
  }
  bool offer(const Values& values, double margin_db) {
    if (!(margin_db > bar_db())) return false;
    const auto at = std::find_if(held_.begin(), held_.end(),
                                 [&](const Choice& c) { return c.margin_db < margin_db; });
    held_.insert(at, {values, margin_db});
    if (static_cast<int>(held_.size()) > keep_) held_.pop_back();
    return true;
  }
  std::vector<Choice> take() { return std::move(held_); }

 private:
  int keep_;
  double floor_db_;
  std::vector<Choice> held_;
};

class Enumeration {
 public:
  Enumeration(const Topology& topology, std::vector<std::vector<double>> lists,
              const PointSet& screen, const PointSet& fine, BestChoices& best, RunControl& control)
      : lists_(std::move(lists)),
        screen_points_(screen),
        screen_(topology, screen),
        fine_(topology, fine),
        fine_scratch_(fine_.make_scratch()),
        best_(best),
        control_(control),
        values_(topology.slots.size()) {
    for (double value : lists_[0]) pivots_.push_back({screen_.factor(0, value), value});
    std::sort(pivots_.begin(), pivots_.end());
    for (int i = 0; i < 3; ++i) weights_[i] = AlignedArray(screen.points);
    states_.resize(values_.size() + 1);
    for (auto& level : states_) {
      for (AlignedArray& array : level) array = AlignedArray(screen.points);
    }
    task_.pivot = screen_.step(0);
    task_.points = screen.points;
    task_.source_re = screen.source_re.data();
    task_.source_im = screen.source_im.data();
    task_.weight_n = weights_[0].data();
    task_.weight_d = weights_[1].data();
    task_.weight_0 = weights_[2].data();
  }

  // False if it was ended early.
  bool run() {
    copy_load_state();
    raise_bar();
    descend(static_cast<int>(values_.size()) - 1);
    return !ended_;
  }
  std::uint64_t evaluations() const { return evaluations_; }

 private:
  StateArrays arrays(int level) {
    auto& s = states_[level];
    return {s[0].data(), s[1].data(), s[2].data(), s[3].data()};
  }

  void copy_load_state() {
    auto& load = states_[values_.size()];
    const AlignedArray* from[] = {&screen_points_.voltage_re, &screen_points_.voltage_im,
                                  &screen_points_.current_re, &screen_points_.current_im};
    for (int i = 0; i < 4; ++i) {
      std::copy_n(from[i]->data(), screen_points_.points, load[i].data());
    }
  }

  // Sets the pivot's weights so that they ask for a margin above the bar.
  void raise_bar() {
    bar_db_ = best_.bar_db();
    for (const Segment& segment : screen_points_.segments) {
      const Goal& goal = screen_points_.goals[segment.goal];
      // A bar of minus infinity asks for nothing that a finite one would not.
      const double wanted = std::max(bar_db_, -300.0) / goal.weight;
      const double bound = goal.bound == GoalBound::best ? 0 : goal.bound_db;
      const bool at_most = goal.bound == GoalBound::at_most;
      const double power = std::pow(10, -(at_most ? bound - wanted : bound + wanted) / 10);
      const double sign = at_most ? -1 : 1;
      const bool gain = goal.quantity == GoalQuantity::transducer_gain;
      for (int k = segment.first; k < segment.first + segment.padded; ++k) {
        weights_[0][k] = gain ? 0 : sign;
        weights_[1][k] = gain ? sign : -sign * power;
        weights_[2][k] = gain ? -sign * power : 0;
      }
    }
  }

  // Slots from `slot` down to the pivot are open; the state in front of `slot` is at slot + 1.
  void descend(int slot) {
    if (slot <= 1) {
      if (slot < 1) return try_pivots(nullptr, 0, 1);
      const KernelStep& step = screen_.step(1);
      for (double value : lists_[1]) {
        if (ended_) return;
        values_[1] = value;
        try_pivots(&step, screen_.factor(1, value), 2);
      }
      return;
    }
    for (double value : lists_[slot]) {
      if (ended_) return;
      values_[slot] = value;
      advance_state(screen_.step(slot), screen_.factor(slot, value), arrays(slot + 1), arrays(slot),
                    screen_points_.points);
      descend(slot - 1);
    }
  }

  void try_pivots(const KernelStep* step, double factor, int level) {
    if (++tried_ % kPollEvery == 0 && control_.should_end()) ended_ = true;
    const FactorInterval interval = pivot_interval(task_, step, factor, arrays(level));
    ++evaluations_;
    if (interval.empty()) return;
    auto at = std::lower_bound(pivots_.begin(), pivots_.end(), std::make_pair(interval.low, -1.0));
    for (; at != pivots_.end() && at->first <= interval.high; ++at) {
      values_[0] = at->second;
      ++evaluations_;
      const double margin = fine_.margin_db(values_.data(), fine_scratch_);
      if (best_.offer(values_, margin) && best_.bar_db() > bar_db_) raise_bar();
    }
  }

  std::vector<std::vector<double>> lists_;
  const PointSet& screen_points_;
  Ladder screen_, fine_;
  Ladder::Scratch fine_scratch_;
  BestChoices& best_;
  RunControl& control_;
  Values values_;
  std::vector<std::pair<double, double>> pivots_;  // factor, value; by factor
  AlignedArray weights_[3];
  std::vector<std::array<AlignedArray, 4>> states_;  // at each level; the load's is the last
  PivotTask task_;
  double bar_db_ = 0;
  std::uint64_t tried_ = 0, evaluations_ = 0;
  bool ended_ = false;
};

// Fits the elements that can have any value to one combination of the others.
Choice fit_open_values(const Topology& topology, const Choice& choice, const PointSet& fine,
                       std::uint64_t seed, std::uint64_t& evaluations) {
  Topology rest = topology;
  for (std::size_t i = 0; i < rest.slots.size(); ++i) {
    if (!any_value(rest.slots[i])) rest.slots[i].range = {choice.values[i], choice.values[i]};
  }
  const Polished polished = polish(rest, choice.values, fine, seed);
  evaluations += polished.evaluations;
  return {polished.values, polished.margin_db};
}

}  // namespace

GoalGrid spread_order(const GoalGrid& grid) {
  GoalGrid out;
  for (const std::vector<double>& band : grid) {
    // Ends first, then the midpoints of what is left, widest gaps first.
    const std::size_t n = band.size();
    std::vector<double> order;
    std::vector<bool> taken(n, false);
    const auto take = [&](std::size_t i) {
      if (!taken[i]) order.push_back(band[i]);
      taken[i] = true;
    };
    take(0);
    take(n - 1);
    for (std::size_t parts = 2; order.size() < n; parts *= 2) {
      for (std::size_t k = 1; k < parts; k += 2) take((n - 1) * k / parts);
      if (parts >= n) {
        for (std::size_t i = 0; i < n; ++i) take(i);
      }
    }
    out.push_back(std::move(order));
  }
  return out;
}

DiscreteOutcome choose_values(const Topology& topology, const Values& ideal, const PointSet& screen,
                              const PointSet& fine, double floor_db, int keep, std::uint64_t seed,
                              RunControl& control) {
  DiscreteOutcome out;
  const bool open = std::any_of(topology.slots.begin(), topology.slots.end(), any_value);
  auto lists = candidate_lists(topology, ideal);
  const bool cut = cut_lists(lists, ideal);
  const double no_floor = -std::numeric_limits<double>::infinity();
  BestChoices best(open ? std::max(keep, kFittedCombinations) : keep, open ? no_floor : floor_db);
  Enumeration enumeration(topology, std::move(lists), screen, fine, best, control);
  const bool complete = enumeration.run();
  out.evaluations = enumeration.evaluations();
  out.exact = complete && !cut && !open;
  if (!open) {
    out.best = best.take();
    return out;
  }
  BestChoices fitted(keep, floor_db);
  for (const Choice& choice : best.take()) {
    const Choice fit = fit_open_values(topology, choice, fine, seed, out.evaluations);
    fitted.offer(fit.values, fit.margin_db);
  }
  out.best = fitted.take();
  return out;
}

}  // namespace bandwright
