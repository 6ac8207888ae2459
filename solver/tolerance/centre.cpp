#include "solver/tolerance/centre.h"

#include <algorithm>
#include <cmath>
#include <map>
#include <optional>

#include "solver/rf/ladder.h"
#include "solver/tolerance/monte_carlo.h"

namespace bandwright {
namespace {

// Boards of the first look at a network; those clearly behind are given up after it.
constexpr int kFirstLook = 250;
constexpr int kClimbs = 3;
constexpr int kMostSteps = 40;
// Neighbours that change every element at once are tried for up to this many elements.
constexpr int kAllAtOnce = 4;

using Index = std::vector<int>;  // position in each element's list

class Climber {
 public:
  Climber(const Topology& topology, const PointSet& points, const CentreRequest& request)
      : topology_(topology),
        request_(request),
        ladder_(topology, points),
        scratch_(ladder_.make_scratch()) {}

  // Lists of values around `start`; the start's own place in them is returned.
  Index lay_out(const Values& start) {
    lists_.clear();
    Index at;
    for (std::size_t i = 0; i < start.size(); ++i) {
      const Slot& slot = topology_.slots[i];
      std::vector<double> list;
      if (!slot.fixed()) list = offered_values(slot.part, slot.range.min, slot.range.max);
      const auto here = std::find(list.begin(), list.end(), start[i]);
      if (here == list.end()) {
        list = {start[i]};
        at.push_back(0);
      } else {
        at.push_back(static_cast<int>(here - list.begin()));
      }
      lists_.push_back(std::move(list));
    }
    return at;
  }

  // The score of a network, or nothing if it is clearly behind `rival`.
  std::optional<YieldScore> score(const Values& values, const YieldScore* rival) {
    const Boards boards(topology_, values, request_.distribution, request_.seed, request_.batch);
    std::vector<double> margins;
    const int first = std::min(kFirstLook, request_.boards);
    judge(boards, margins, first);
    if (rival != nullptr) {
      const double p = passed(margins) / static_cast<double>(first);
      const double spread = std::sqrt(std::max(p * (1 - p), 1.0 / first) / first);
      if (p + 3 * spread < rival->yield) return std::nullopt;
    }
    judge(boards, margins, request_.boards);
    const double yield = passed(margins) / static_cast<double>(margins.size());
    return YieldScore{yield, quantile(margins, 0.05)};
  }

  Values values_at(const Index& at) const {
    Values values;
    for (std::size_t i = 0; i < at.size(); ++i) values.push_back(lists_[i][at[i]]);
    return values;
  }

  // Neighbouring networks: one or two steps of one element, one step of any pair, and (for few
  // elements) one step of any set.
  std::vector<Index> neighbours(const Index& at) const {
    std::vector<Index> out;
    const int n = static_cast<int>(at.size());
    const auto add = [&](const Index& candidate) {
      for (int i = 0; i < n; ++i) {
        if (candidate[i] < 0 || candidate[i] >= static_cast<int>(lists_[i].size())) return;
      }
      out.push_back(candidate);
    };
    int sets = 1;
    for (int i = 0; i < n; ++i) sets *= 3;
    for (int code = 1; code < sets; ++code) {
      Index candidate = at;
      int moved = 0;
      for (int i = 0, rest = code; i < n; ++i, rest /= 3) {
        const int step = rest % 3 == 2 ? -1 : rest % 3;
        candidate[i] += step;
        moved += step != 0;
      }
      if (moved <= 2 || n <= kAllAtOnce) add(candidate);
    }
    for (int i = 0; i < n; ++i) {
      for (int step : {-2, 2}) {
        Index candidate = at;
        candidate[i] += step;
        add(candidate);
      }
    }
    return out;
  }

  std::uint64_t evaluations() const { return evaluations_; }

 private:
  void judge(const Boards& boards, std::vector<double>& margins, int upto) {
    Values values(topology_.slots.size());
    while (static_cast<int>(margins.size()) < upto) {
      boards.draw(margins.size(), values.data());
      margins.push_back(ladder_.margin_db(values.data(), scratch_));
      ++evaluations_;
    }
  }
  static double passed(const std::vector<double>& margins) {
    return static_cast<double>(
        std::count_if(margins.begin(), margins.end(), [](double m) { return m >= 0; }));
  }

  const Topology& topology_;
  CentreRequest request_;
  Ladder ladder_;
  Ladder::Scratch scratch_;
  std::vector<std::vector<double>> lists_;
  std::uint64_t evaluations_ = 0;
};

}  // namespace

YieldScore score_yield(const Topology& topology, const Values& values, const PointSet& points,
                       const CentreRequest& request) {
  return *Climber(topology, points, request).score(values, nullptr);
}

Centred centre(const Topology& topology, const std::vector<Values>& starts, const PointSet& points,
               const CentreRequest& request, RunControl& control) {
  Climber climber(topology, points, request);
  std::vector<Centred> begun;
  for (const Values& start : starts) {
    const YieldScore* rival = begun.size() >= kClimbs ? &begun[kClimbs - 1].score : nullptr;
    const auto score = climber.score(start, rival);
    if (score) begun.push_back({start, *score});
    std::stable_sort(begun.begin(), begun.end(),
                     [](const Centred& a, const Centred& b) { return b.score < a.score; });
    if (control.should_end()) break;
  }
  if (begun.size() > kClimbs) begun.resize(kClimbs);
  Centred best = begun.front();
  std::map<Values, bool> seen;
  for (const Centred& start : begun) {
    Centred here = start;
    Index at = climber.lay_out(start.values);
    bool moved = true;
    for (int step = 0; moved && step < kMostSteps && !control.should_end(); ++step) {
      moved = false;
      Index to = at;
      for (const Index& candidate : climber.neighbours(at)) {
        const Values values = climber.values_at(candidate);
        if (!seen.emplace(values, true).second) continue;
        const auto score = climber.score(values, &here.score);
        if (!score || !(here.score < *score)) continue;
        here = {values, *score};
        to = candidate;
        moved = true;
      }
      at = to;
    }
    if (best.score < here.score) best = here;
  }
  best.evaluations = climber.evaluations();
  return best;
}

}  // namespace bandwright
