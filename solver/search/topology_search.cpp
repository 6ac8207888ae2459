#include "solver/search/topology_search.h"

#include <algorithm>
#include <cmath>
#include <set>

namespace bandwright {
namespace {

// Two starts agree when their margins differ by less than this.
constexpr double kAgreeDb = 0.05;
// How far below the best a basin's bound may lie and still be climbed to the end, so that the
// second-best topologies of a ranking are good ones too.
constexpr double kSlackDb = 0.02;
constexpr int kStageEvaluations = 300;
// Dips of the margin within this of the worst take part in the final sharpening.
constexpr double kNearDb = 1.0;
// A dip is watched over one part in this many of its band to either side.
constexpr int kReachShare = 32;
// Sharpening is repeated with the dips as they then are, while it gains this much.
constexpr int kSharpenRounds = 4;
constexpr double kSharpenedDb = 2e-4;

struct Stage {
  int power;
  double step;
  double tolerance_db;
};
constexpr Stage kStages[] = {{2, 0.5, 1e-2}, {8, 0.1, 1e-2}, {32, 0.1, 1e-3}, {128, 0.03, 1e-4}};

// Directions of Roberts' additive recurrence (2018): powers of the root of x^(d+1) = x + 1.
double additive_root(int dimension) {
  double x = 1.5;
  for (int i = 0; i < 60; ++i) x = std::pow(1 + x, 1.0 / (dimension + 1));
  return x;
}

// The dips of the margin near the worst one, each with points around it out to where the dip may
// move: what linear models need to see. The rest of the band stays where it is meanwhile.
std::vector<int> points_near_worst(const PointSet& points, const std::vector<double>& margins,
                                   double least_db) {
  std::set<int> near;
  for (const Segment& segment : points.segments) {
    const int first = segment.first, last = segment.first + segment.count - 1;
    const int reach = std::max(4, segment.count / kReachShare);
    for (int k = first; k <= last; ++k) {
      const bool dip = margins[k] < least_db + kNearDb &&
                       (k == first || margins[k] <= margins[k - 1]) &&
                       (k == last || margins[k] <= margins[k + 1]);
      if (!dip) continue;
      for (int offset : {0, reach / 4, reach / 2, reach}) {
        near.insert(std::max(first, k - offset));
        near.insert(std::min(last, k + offset));
      }
    }
  }
  return {near.begin(), near.end()};
}

}  // namespace

TopologySearch::TopologySearch(const Topology& topology, const PointSet& points, std::uint64_t seed)
    : topology_(topology),
      space_(topology),
      ladder_(topology_, points),
      scratch_(ladder_.make_scratch()),
      values_(topology.slots.size()),
      random_(seed, 1) {}

std::vector<double> TopologySearch::spread_start(int index) const {
  const int d = space_.dimension();
  const double root = additive_root(d);
  std::vector<double> start(d);
  double alpha = 1;
  for (int i = 0; i < d; ++i) {
    alpha /= root;
    const double at = random_.uniform(i) + alpha * (index + 1);
    const double share = at - std::floor(at);
    start[i] = space_.lower(i) + share * (space_.upper(i) - space_.lower(i));
  }
  return start;
}

std::vector<double> TopologySearch::kicked(int index) const {
  // A random subset of the values, each moved by 1 to 100 % in log value.
  const RandomStream draw = random_.fork(1000003u + index);
  std::vector<double> start = best_point_;
  const double size = std::pow(10, -2 + 2 * draw.uniform(0));
  const double share = 0.3 + 0.7 * draw.uniform(1);
  for (std::size_t i = 0; i < start.size(); ++i) {
    if (draw.uniform(2 + 2 * i) < share) start[i] += size * draw.normal(3 + 2 * i);
    start[i] =
        std::clamp(start[i], space_.lower(static_cast<int>(i)), space_.upper(static_cast<int>(i)));
  }
  return start;
}

TopologySearch::Climb TopologySearch::climb(std::vector<double> start, int first_power,
                                            double first_step, double floor_db) {
  double step = first_step;
  for (const Stage& stage : kStages) {
    if (stage.power < first_power) continue;
    const LocalObjective objective = [&](const double* point) {
      const double penalty = space_.to_values(point, values_.data());
      return ladder_.smooth_margin_db(values_.data(), stage.power, scratch_) - penalty;
    };
    LocalOptions options;
    options.first_step = step;
    options.value_tolerance = stage.tolerance_db;
    options.most_evaluations = kStageEvaluations;
    options.seed = random_.bits(starts_ * 64 + stage.power);
    LocalBest best = maximise(objective, start, options);
    evaluations_ += best.evaluations;
    start = std::move(best.point);
    step = stage.step;
    if (best.value < floor_db) break;
  }
  space_.to_values(start.data(), values_.data());
  ++evaluations_;
  return {start, ladder_.margin_db(values_.data(), scratch_)};
}

void TopologySearch::keep(const Climb& climb) {
  if (!(climb.margin_db > best_margin_db_) || !std::isfinite(climb.margin_db)) return;
  best_margin_db_ = climb.margin_db;
  best_point_ = climb.point;
}

void TopologySearch::run(int count, int kicks, double floor_db, RunControl& control) {
  if (space_.dimension() == 0) {
    if (!found()) keep(climb({}, 1 << 20, 0, kNone));
    return;
  }
  for (int i = 0; i < count; ++i) {
    if (found() && control.should_end()) return;
    const double floor = std::max(floor_db, best_margin_db_ - kSlackDb);
    const Climb end = climb(spread_start(starts_++), 2, 0.5, floor);
    ends_db_.push_back(end.margin_db);
    keep(end);
  }
  for (int i = 0; i < kicks; ++i) {
    if (control.should_end()) return;
    keep(climb(kicked(kicks_++), 32, 0.1, best_margin_db_));
  }
}

void TopologySearch::run_from(const Values& values) {
  keep(climb(space_.point(values), 32, 0.1, kNone));
}

int TopologySearch::agreeing_starts() const {
  return static_cast<int>(std::count_if(ends_db_.begin(), ends_db_.end(), [&](double end) {
    return end > best_margin_db_ - kAgreeDb;
  }));
}

Polished polish(const Topology& topology, const Values& values, const PointSet& points,
                std::uint64_t seed) {
  const LogSpace space(topology);
  const Ladder ladder(topology, points);
  Ladder::Scratch scratch = ladder.make_scratch();
  Values work(values);
  Polished out{values, ladder.margin_db(values.data(), scratch), 1};
  if (space.dimension() == 0) return out;
  std::vector<double> point = space.point(values);
  const auto offer = [&](LocalBest best) {
    out.evaluations += best.evaluations;
    const Values found = space.values(best.point);
    const double margin = ladder.margin_db(found.data(), scratch);
    if (!(margin > out.margin_db)) return;
    out.margin_db = margin;
    out.values = found;
    point = std::move(best.point);
  };
  for (int power : {128, 512, 2048}) {
    const LocalObjective objective = [&](const double* at) {
      const double penalty = space.to_values(at, work.data());
      return ladder.smooth_margin_db(work.data(), power, scratch) - penalty;
    };
    offer(maximise(objective, point, {LocalMethod::principal_axis, 0.02, 1e-5, 600, seed + power}));
  }
  std::vector<double> margins(points.points);
  for (int round = 0; round < kSharpenRounds; ++round) {
    const double before = ladder.point_margins_db(out.values.data(), margins.data(), scratch);
    const std::vector<int> near = points_near_worst(points, margins, before);
    const LocalMargins near_margins = [&](const double* at, double* to) {
      const double penalty = space.to_values(at, work.data());
      ladder.point_margins_db(work.data(), margins.data(), scratch);
      for (std::size_t i = 0; i < near.size(); ++i) to[i] = margins[near[i]] - penalty;
    };
    offer(maximise_least(near_margins, static_cast<int>(near.size()), point,
                         {LocalMethod::simplex, round == 0 ? 0.005 : 0.02, 1e-6, 600, seed}));
    if (out.margin_db < before + kSharpenedDb) break;
  }
  return out;
}

}  // namespace bandwright
