#include "solver/limit/limit.h"

#include <algorithm>
#include <cmath>
#include <utility>

#include "solver/limit/band_grid.h"
#include "solver/limit/nehari_form.h"
#include "solver/limit/port_nodes.h"
#include "solver/limit/rational_basis.h"

namespace bandwright {
namespace {

// Past this the discs are so small that rounding hides them; a match this good counts as perfect.
constexpr double kHighestLossDb = 110;
// Multiplications in one form, at most: what a section may cost.
constexpr double kMostWork = 3e8;

MatchLimit with_return_loss(double loss_db, int section, double error_db) {
  const double r = reflection_from_return_loss_db(loss_db);
  const double gain = (1 - r) * (1 + r);
  const double gain_db = gain > 0 ? 10 * std::log10(gain) : -kPerfectReturnLossDb;
  return {loss_db, std::max(gain_db, -kPerfectReturnLossDb), section, error_db, true};
}

std::vector<BandRange> in_unit(std::vector<BandRange> bands, double unit_hz) {
  for (BandRange& band : bands) band = {band.from_hz / unit_hz, band.to_hz / unit_hz};
  return bands;
}

// Poles of all sections that can be afforded, and how many functions each section has.
struct Sections {
  std::vector<PolePair> poles;
  std::vector<int> sizes;
};

Sections affordable_sections(const std::vector<SpacedBand>& bands, int refinements, double nodes) {
  Sections sections;
  int size = 0;
  for (const auto& added : pole_levels(bands, refinements)) {
    for (const PolePair& pole : added) size += static_cast<int>(pole.functions());
    const double work = static_cast<double>(size) * size * nodes;
    if (!sections.sizes.empty() && work > kMostWork) break;
    sections.poles.insert(sections.poles.end(), added.begin(), added.end());
    sections.sizes.push_back(size);
  }
  return sections;
}

// The limit with `end` at one end and a resistance at the other; `bands` as from merged_bands().
MatchLimit limit_to_resistance(const PortView& end, const std::vector<BandRange>& bands,
                               const LimitOptions& options) {
  const double unit_hz = bands.back().to_hz;
  const auto nodes = port_nodes(end, spaced_bands(bands), unit_hz);
  if (!nodes) return with_return_loss(0, 0, 0);

  const int refinements = std::clamp(options.refinements, 1, kLimitRefinements);
  const Sections sections = affordable_sections(spaced_bands(in_unit(bands, unit_hz)), refinements,
                                                static_cast<double>(nodes->size()));
  const NehariForm form(*nodes, sections.poles);
  double loss_db = kPerfectReturnLossDb;
  double error_db = 0;
  int used = 0;
  for (const int section : sections.sizes) {
    const double start_db = std::min(loss_db, kHighestLossDb);
    const double found_db = form.lowest_unreachable_db(section, start_db);
    used = section;
    if (found_db == kHighestLossDb) continue;
    error_db = loss_db - found_db;
    loss_db = found_db;
    if (error_db < options.settled_db) break;
  }
  return with_return_loss(loss_db, used, error_db);
}

// The kMostLimitBands bands with the lowest limits of their own.
std::vector<BandRange> hardest(const PortView& end, const std::vector<BandRange>& bands) {
  std::vector<std::pair<double, std::size_t>> order;
  for (std::size_t i = 0; i < bands.size(); ++i) {
    order.emplace_back(limit_to_resistance(end, {bands[i]}, {2, 0}).return_loss_db, i);
  }
  std::sort(order.begin(), order.end());
  std::vector<BandRange> kept;
  for (std::size_t i = 0; i < kMostLimitBands; ++i) kept.push_back(bands[order[i].second]);
  return merged_bands(std::move(kept));
}

MatchLimit limit_at(const PortView& end, const std::vector<BandRange>& bands,
                    const LimitOptions& options) {
  const std::vector<BandRange> merged = merged_bands(bands);
  if (merged.empty()) return with_return_loss(kPerfectReturnLossDb, 0, 0);
  if (merged.size() <= kMostLimitBands) return limit_to_resistance(end, merged, options);
  MatchLimit limit = limit_to_resistance(end, hardest(end, merged), options);
  limit.tight = false;
  return limit;
}

bool is_resistance(const OnePort& port) {
  return port.is_constant() && port.constant_ohm().imag() == 0;
}

// How far, as a mismatch, the in-band data of `port` are from those of some passive one-port.
//
// A reflection of passive networks that matches the conjugate of `port` everywhere is that of
// `port` itself, so the distance is the conjugate's own limit.
double distance_from_passive(const OnePort& port, const std::vector<BandRange>& bands) {
  const bool circuit = !port.is_constant() && port.sample_hz().empty();
  if (circuit || is_resistance(port)) return 0;
  const MatchLimit limit = limit_at({port, true}, bands, {});
  return reflection_from_return_loss_db(limit.return_loss_db - limit.error_db);
}

// The limit at one end when the `other` end is not a resistance.
//
// What the network presents to `end` would be analytic with a passive one-port at the other end.
// With data `distance` from that it is moved by no more than `distance`, because no passive network
// enlarges a mismatch between two terminations; and mismatches add like velocities (they are
// pseudo-hyperbolic distances).
MatchLimit limit_between(const OnePort& end, const OnePort& other,
                         const std::vector<BandRange>& bands, const LimitOptions& options) {
  const MatchLimit limit = limit_at({end, false}, bands, options);
  const double distance = distance_from_passive(other, bands);
  const double r = reflection_from_return_loss_db(limit.return_loss_db);
  const double left = std::max(0.0, (r - distance) / (1 - r * distance));
  MatchLimit weaker = with_return_loss(return_loss_db(left), limit.section, limit.error_db);
  weaker.tight = false;
  return weaker;
}

}  // namespace

MatchLimit match_limit(const OnePort& source, const OnePort& load,
                       const std::vector<BandRange>& bands, const LimitOptions& options) {
  if (is_resistance(source)) return limit_at({load, false}, bands, options);
  const MatchLimit at_load = limit_between(load, source, bands, options);
  const MatchLimit at_source = limit_between(source, load, bands, options);
  return at_source.return_loss_db < at_load.return_loss_db ? at_source : at_load;
}

}  // namespace bandwright
