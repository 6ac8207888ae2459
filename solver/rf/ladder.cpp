#include "solver/rf/ladder.h"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "solver/rf/element_model.h"

namespace bandwright {
namespace {

Badness badness_kind(const Goal& goal, bool lossless) {
  const bool at_most = goal.bound == GoalBound::at_most;
  if (goal.quantity == GoalQuantity::transducer_gain) {
    return at_most ? Badness::transferred : Badness::lost;
  }
  if (at_most) return Badness::not_reflected;
  return lossless ? Badness::reflected_from_gain : Badness::reflected;
}

// The factor that makes a badness 1 when the goal is just met.
double badness_scale(const Goal& goal) {
  if (goal.bound == GoalBound::best) return 1;
  const double bound = std::pow(10, goal.bound_db / 10);
  return goal.bound == GoalBound::at_least ? bound : 1 / bound;
}

KernelStep::Op step_op(Place place, bool lossless, bool affine) {
  using Op = KernelStep::Op;
  const bool series = place == Place::series;
  if (affine) return series ? Op::series_affine : Op::shunt_affine;
  if (lossless) return series ? Op::series_reactance : Op::shunt_susceptance;
  return series ? Op::series_linear : Op::shunt_linear;
}

double decibels(double power_ratio) {
  return 10 / std::numbers::ln10 * std::log(power_ratio);
}

}  // namespace

Ladder::Ladder(const Topology& topology, const PointSet& points) : points_(&points) {
  const int n = static_cast<int>(topology.slots.size());
  for (int i = n; i-- > 0;) {
    const Slot& slot = topology.slots[i];
    const bool series = slot.place == Place::series;
    std::vector<ElementModel> models;
    for (double f : points.frequency_hz) models.push_back(element_model(slot.kind, slot.part, f));
    const bool affine = std::any_of(models.begin(), models.end(),
                                    [](const ElementModel& m) { return m.fixed != Complex(); });
    const bool lossless = std::all_of(models.begin(), models.end(),
                                      [](const ElementModel& m) { return m.per_x.real() == 0; });
    AlignedArray a(points.points), b(points.points), c(points.points), d(points.points);
    for (int k = 0; k < points.points; ++k) {
      // A shunt element without a fixed part is linear in the admittance.
      const Complex per_x = series || affine ? models[k].per_x : 1.0 / models[k].per_x;
      a[k] = per_x.real();
      b[k] = per_x.imag();
      c[k] = models[k].fixed.real();
      d[k] = models[k].fixed.imag();
    }
    KernelStep step{step_op(slot.place, lossless, affine), a.data(), b.data(), c.data(), d.data()};
    steps_.push_back(step);
    for (AlignedArray* table : {&a, &b, &c, &d}) tables_.push_back(std::move(*table));
    const bool by_reciprocal = uses_reciprocal(slot.kind);
    reciprocal_.insert(reciprocal_.begin(), series || affine ? by_reciprocal : !by_reciprocal);
  }
  const bool lossless = topology.lossless() && points.load_passive;
  for (const Segment& segment : points.segments) {
    const Goal& goal = points.goals[segment.goal];
    segments_.push_back({segment.first, segment.padded, badness_kind(goal, lossless)});
    scale_.push_back(badness_scale(goal));
    weight_.push_back(goal.weight);
    equal_weights_ = equal_weights_ && goal.weight == 1;
  }
  task_ = {steps_.data(),
           static_cast<int>(steps_.size()),
           segments_.data(),
           static_cast<int>(segments_.size()),
           points.voltage_re.data(),
           points.voltage_im.data(),
           points.current_re.data(),
           points.current_im.data(),
           points.source_re.data(),
           points.source_im.data(),
           points.source_real,
           points.source_real && is_alternating(steps_.data(), n)};
}

Ladder::Scratch Ladder::make_scratch() const {
  return {AlignedArray(steps_.size()), AlignedArray(points_->points),
          AlignedArray(segments_.size())};
}

void Ladder::prepare(const double* values, Scratch& scratch) const {
  const int n = slots();
  for (int i = 0; i < n; ++i) {
    scratch.x[n - 1 - i] = reciprocal_[i] ? 1 / values[i] : values[i];
  }
}

void Ladder::evaluate_points(const double* values, Scratch& scratch) const {
  prepare(values, scratch);
  kernel_points(task_, scratch.x.data(), scratch.badness.data(), scratch.worst.data());
}

double Ladder::segment_margin_db(int segment, const Scratch& scratch) const {
  // A reflection too small to tell from rounding counts as a perfect match.
  const double badness = std::max(scratch.worst[segment], 1e-20);
  return -weight_[segment] * decibels(scale_[segment] * badness);
}

double Ladder::margin_db(const double* values, Scratch& scratch) const {
  prepare(values, scratch);
  kernel_worst(task_, scratch.x.data(), scratch.worst.data());
  double margin = segment_margin_db(0, scratch);
  for (std::size_t g = 1; g < segments_.size(); ++g) {
    margin = std::min(margin, segment_margin_db(static_cast<int>(g), scratch));
  }
  return margin;
}

double Ladder::smooth_margin_db(const double* values, int p, Scratch& scratch) const {
  evaluate_points(values, scratch);
  // Everything is taken relative to the worst point so that high powers neither overflow nor
  // vanish.
  double top = 0;
  for (std::size_t g = 0; g < segments_.size(); ++g) {
    const double most = scale_[g] * std::max(scratch.worst[g], 1e-20);
    top = std::max(top, equal_weights_ ? most : std::pow(most, weight_[g]));
  }
  double sum = 0;
  for (std::size_t g = 0; g < segments_.size(); ++g) {
    const Segment& segment = points_->segments[g];
    const double* badness = scratch.badness.data() + segment.first;
    if (equal_weights_) {
      sum += kernel_power_sum(badness, points_->real.data() + segment.first, segment.padded,
                              scale_[g] / top, p);
      continue;
    }
    for (int k = 0; k < segment.count; ++k) {
      double ratio = std::pow(scale_[g] * std::max(badness[k], 0.0), weight_[g]) / top;
      for (int power = 2; power < p; power *= 2) ratio *= ratio;
      sum += ratio;
    }
  }
  const double mean = sum / points_->real_points;
  return -decibels(top) - decibels(mean) * 2 / p;
}

double Ladder::point_margins_db(const double* values, double* out, Scratch& scratch) const {
  evaluate_points(values, scratch);
  double least = 1e300;
  for (std::size_t g = 0; g < segments_.size(); ++g) {
    for (int k = 0; k < segments_[g].padded; ++k) {
      const int at = segments_[g].first + k;
      out[at] = -weight_[g] * decibels(scale_[g] * std::max(scratch.badness[at], 1e-20));
      least = std::min(least, out[at]);
    }
  }
  return least;
}

}  // namespace bandwright
