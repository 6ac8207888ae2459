// One topology on one point set, prepared for millions of evaluations.
//
// Holds the element tables; the point set is shared by all topologies of a problem and must
// outlive it. Values are natural (henry, farad, ohm), one for each slot, fixed slots included.
//
// Thread safety: const members may be called from any thread; each thread brings its own Scratch.
#pragma once

#include <vector>

#include "solver/base/aligned.h"
#include "solver/rf/ladder_kernel.h"
#include "solver/rf/points.h"
#include "solver/rf/topology.h"

namespace bandwright {

class Ladder {
 public:
  // Working memory of one thread.
  struct Scratch {
    AlignedArray x;        // kernel factors, from the load to the source
    AlignedArray badness;  // of every point
    AlignedArray worst;    // of every segment
  };

  Ladder(const Topology& topology, const PointSet& points);

  Scratch make_scratch() const;
  int slots() const { return static_cast<int>(reciprocal_.size()); }
  const PointSet& points() const { return *points_; }
  // One slot's kernel step, and the factor that a value has in it.
  const KernelStep& step(int slot) const { return steps_[slots() - 1 - slot]; }
  double factor(int slot, double value) const { return reciprocal_[slot] ? 1 / value : value; }

  // The worst weighted margin over all points, dB. Not finite only if `values` overflow.
  double margin_db(const double* values, Scratch& scratch) const;
  // A smooth stand-in for the margin: minus ten times the log of the power mean, with exponent
  // `p` on the reflection, of every point's badness. Rises to the margin with p. `p` is 2, 4, 8,
  // ...
  double smooth_margin_db(const double* values, int p, Scratch& scratch) const;
  // Fills the scratch with every point's badness (what the kernel reads: see `Badness`).
  void evaluate_points(const double* values, Scratch& scratch) const;
  // The weighted margin of every point (padding included), dB, to `out`; returns the smallest.
  double point_margins_db(const double* values, double* out, Scratch& scratch) const;
  // The worst margin of one segment after margin_db() or a like call filled `scratch`.
  double segment_margin_db(int segment, const Scratch& scratch) const;

 private:
  void prepare(const double* values, Scratch& scratch) const;

  const PointSet* points_;
  std::vector<bool> reciprocal_;      // per slot: the kernel's factor is 1/value
  std::vector<AlignedArray> tables_;  // behind the pointers in steps_
  std::vector<KernelStep> steps_;     // from the load to the source
  std::vector<KernelSegment> segments_;
  std::vector<double> scale_;  // per segment: badness times this is 1 when just met
  std::vector<double> weight_;
  bool equal_weights_ = true;
  KernelTask task_;
};

}  // namespace bandwright
