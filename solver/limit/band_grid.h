// The bands as the limit sees them, and the frequencies at which the load is read.
//
// What is integrated over a band is smooth inside it and rough at its edges, where the best match
// turns ever faster. Gauss-Legendre panels that shrink towards each edge follow it. A spline has a
// corner in its third derivative at every sample, so panels also end there.
#pragma once

#include <span>
#include <vector>

#include "solver/limit/limit.h"

namespace bandwright {

// `bands` in increasing order, overlaps merged, bands without width dropped.
std::vector<BandRange> merged_bands(std::vector<BandRange> bands);

// A band and the widths of the gaps beside it. The lower gap of the lowest band reaches to minus
// its lower edge, where the band's mirror image at negative frequencies ends.
struct SpacedBand {
  BandRange band;
  double gap_below_hz = 0;
  double gap_above_hz = 0;

  double width_hz() const { return band.to_hz - band.from_hz; }
  // A gap under a billionth of the band counts as closed: it cannot be told from rounding.
  bool meets_below() const { return closed(gap_below_hz); }
  // The smallest length that matters beside each edge.
  double scale_below_hz() const { return edge_scale(gap_below_hz); }
  double scale_above_hz() const { return edge_scale(gap_above_hz); }

 private:
  bool closed(double gap_hz) const;
  double edge_scale(double gap_hz) const;
};

// `merged` as from merged_bands().
std::vector<SpacedBand> spaced_bands(const std::vector<BandRange>& merged);

struct QuadratureNode {
  double frequency_hz = 0;
  double weight_hz = 0;
};

// Nodes inside `band`, increasing. `knots_hz` are the frequencies where the data have a corner,
// increasing; where there are very many, panels end at some of them only.
std::vector<QuadratureNode> band_nodes(const SpacedBand& band, std::span<const double> knots_hz);

}  // namespace bandwright
