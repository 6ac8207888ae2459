#include "solver/limit/band_grid.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <limits>
#include <numbers>

namespace bandwright {
namespace {

constexpr std::size_t kOrder = 12;
constexpr double kInteriorPanels = 16;
constexpr double kPanelGrowth = 1.8;
// The panel at an edge, in scales of that edge: below the distance of the closest pole.
constexpr double kFirstPanel = 5e-8;
constexpr double kClosedGap = 1e-9;
constexpr std::size_t kMostKnots = 150;

struct GaussRule {
  std::array<double, kOrder> x{};
  std::array<double, kOrder> weight{};
};

// The roots of the Legendre polynomial by Newton's method from the usual cosine guess (Davis and
// Rabinowitz, Methods of Numerical Integration, 1984, section 2.7).
GaussRule gauss_legendre() {
  GaussRule rule;
  for (std::size_t i = 0; i < kOrder; ++i) {
    double x = std::cos(std::numbers::pi * (static_cast<double>(i) + 0.75) / (kOrder + 0.5));
    double slope = 1;
    for (int turn = 0; turn < 8; ++turn) {
      double before = 1;
      double value = x;
      for (std::size_t n = 2; n <= kOrder; ++n) {
        const double order = static_cast<double>(n);
        const double next = ((2 * order - 1) * x * value - (order - 1) * before) / order;
        before = value;
        value = next;
      }
      slope = kOrder * (x * value - before) / (x * x - 1);
      x -= value / slope;
    }
    rule.x[i] = -x;
    rule.weight[i] = 2 / ((1 - x * x) * slope * slope);
  }
  return rule;
}

// Distances from an edge at which panels end, up to half the band's width.
std::vector<double> graded_distances(double width, double edge_scale) {
  std::vector<double> distances{0.0};
  double panel = edge_scale * kFirstPanel;
  while (distances.back() + panel < width / 2) {
    distances.push_back(distances.back() + panel);
    panel = std::min(panel * kPanelGrowth, width / kInteriorPanels);
  }
  distances.push_back(width / 2);
  return distances;
}

std::vector<double> panel_ends(const SpacedBand& spaced, std::span<const double> knots_hz) {
  const BandRange& band = spaced.band;
  std::vector<double> ends;
  for (const double d : graded_distances(spaced.width_hz(), spaced.scale_below_hz())) {
    ends.push_back(band.from_hz + d);
  }
  for (const double d : graded_distances(spaced.width_hz(), spaced.scale_above_hz())) {
    ends.push_back(band.to_hz - d);
  }
  const auto first = std::upper_bound(knots_hz.begin(), knots_hz.end(), band.from_hz);
  const auto last = std::lower_bound(first, knots_hz.end(), band.to_hz);
  const auto count = static_cast<std::size_t>(last - first);
  const std::size_t stride = count / kMostKnots + 1;
  for (std::size_t i = 0; i < count; i += stride) ends.push_back(*(first + static_cast<long>(i)));
  std::sort(ends.begin(), ends.end());
  return ends;
}

}  // namespace

std::vector<BandRange> merged_bands(std::vector<BandRange> bands) {
  std::erase_if(bands, [](const BandRange& band) { return !(band.to_hz > band.from_hz); });
  std::sort(bands.begin(), bands.end(),
            [](const BandRange& a, const BandRange& b) { return a.from_hz < b.from_hz; });
  std::vector<BandRange> merged;
  for (const BandRange& band : bands) {
    if (!merged.empty() && band.from_hz <= merged.back().to_hz) {
      merged.back().to_hz = std::max(merged.back().to_hz, band.to_hz);
    } else {
      merged.push_back(band);
    }
  }
  return merged;
}

bool SpacedBand::closed(double gap_hz) const {
  return gap_hz <= kClosedGap * width_hz();
}

double SpacedBand::edge_scale(double gap_hz) const {
  return closed(gap_hz) ? width_hz() : std::min(gap_hz, width_hz());
}

std::vector<SpacedBand> spaced_bands(const std::vector<BandRange>& merged) {
  std::vector<SpacedBand> spaced;
  for (std::size_t i = 0; i < merged.size(); ++i) {
    const double below = i > 0 ? merged[i].from_hz - merged[i - 1].to_hz : 2 * merged[i].from_hz;
    const double above = i + 1 < merged.size() ? merged[i + 1].from_hz - merged[i].to_hz
                                               : std::numeric_limits<double>::infinity();
    spaced.push_back({merged[i], below, above});
  }
  return spaced;
}

std::vector<QuadratureNode> band_nodes(const SpacedBand& band, std::span<const double> knots_hz) {
  static const GaussRule kRule = gauss_legendre();
  const std::vector<double> ends = panel_ends(band, knots_hz);
  std::vector<QuadratureNode> nodes;
  for (std::size_t i = 0; i + 1 < ends.size(); ++i) {
    const double half = (ends[i + 1] - ends[i]) / 2;
    const double middle = ends[i] + half;
    // Panels too short to hold a number between their ends.
    if (!(middle > ends[i] && middle < ends[i + 1])) continue;
    for (std::size_t n = 0; n < kOrder; ++n) {
      const double x = std::clamp(middle + half * kRule.x[n], ends[i], ends[i + 1]);
      nodes.push_back({x, half * kRule.weight[n]});
    }
  }
  return nodes;
}

}  // namespace bandwright
