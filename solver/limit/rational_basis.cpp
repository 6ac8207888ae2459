#include "solver/limit/rational_basis.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>

namespace bandwright {
namespace {

// The grid of one level. Its poles stand above each edge at distances that fall by `ratio` from the
// band's width to `depth` scales of that edge, and evenly above the inside of the band.
struct Level {
  double ratio;
  double depth;
  int inside;
};

constexpr std::array<Level, kLimitRefinements> kLevels{{
    {4, 2e-3, 4},
    {2, 5e-4, 8},
    {2, 2e-6, 8},
    {std::numbers::sqrt2, 2e-7, 16},
}};

// How far above the band the grid reaches, in upper band edges: there the load is out of sight.
constexpr double kReach = 4;
constexpr double kSamePole = 1e-6;

bool same(const PolePair& a, const PolePair& b) {
  return std::abs(a.distance - b.distance) <= kSamePole * a.distance &&
         std::abs(a.centre - b.centre) <= kSamePole * a.distance;
}

// Poles above one edge at distances from `width` down to `closest`.
void above_edge(double edge, double width, double closest, double ratio, bool lowest,
                std::vector<PolePair>& poles) {
  for (double d = width; d >= closest; d /= ratio) {
    // Far above the lowest edge it cannot be told from its mirror image: one real pole does.
    poles.push_back({d, lowest && d > edge ? 0 : edge});
  }
}

void above_band(const SpacedBand& spaced, bool lowest, const Level& level,
                std::vector<PolePair>& poles) {
  const BandRange& band = spaced.band;
  const double width = spaced.width_hz();
  // Nothing ends at zero frequency, where a band meets its mirror image.
  const bool from_zero = lowest && spaced.meets_below();
  above_edge(from_zero ? 0 : band.from_hz, width,
             from_zero ? width / 64 : level.depth * spaced.scale_below_hz(), level.ratio, lowest,
             poles);
  above_edge(band.to_hz, width, level.depth * spaced.scale_above_hz(), level.ratio, false, poles);
  for (int i = 0; i < level.inside; ++i) {
    const double share = (i + 0.5) / level.inside;
    poles.push_back({width / 8, band.from_hz + share * width});
  }
  const double centre = from_zero ? 0 : std::sqrt(band.from_hz * band.to_hz);
  for (double d = width * level.ratio; d < kReach * band.to_hz; d *= level.ratio) {
    poles.push_back({d, centre});
  }
}

}  // namespace

std::vector<std::vector<PolePair>> pole_levels(const std::vector<SpacedBand>& bands, int levels) {
  std::vector<std::vector<PolePair>> result;
  std::vector<PolePair> held;
  for (int n = 0; n < levels; ++n) {
    std::vector<PolePair> grid;
    for (std::size_t i = 0; i < bands.size(); ++i) {
      above_band(bands[i], i == 0, kLevels[static_cast<std::size_t>(n)], grid);
    }
    std::vector<PolePair>& added = result.emplace_back();
    for (const PolePair& pole : grid) {
      const auto is_it = [&](const PolePair& other) { return same(pole, other); };
      if (std::any_of(held.begin(), held.end(), is_it)) continue;
      held.push_back(pole);
      added.push_back(pole);
    }
  }
  return result;
}

void evaluate_basis(std::span<const PolePair> poles, double frequency, std::span<Complex> values) {
  Complex product = 1;  // of the all-pass factors of the poles so far
  std::size_t i = 0;
  for (const PolePair& pole : poles) {
    const double width = 2 * pole.distance;
    if (pole.functions() == 1) {
      const Complex low(pole.distance, frequency);
      values[i++] = std::sqrt(width) / low * product;
      product *= std::conj(low) / low;
      continue;
    }
    // s^2 + 2 d s + d^2 + c^2 at s = jw; the difference c - w keeps its digits near the pole.
    const Complex low(
        pole.distance * pole.distance + (pole.centre - frequency) * (pole.centre + frequency),
        width * frequency);
    const Complex common = std::sqrt(2 * width) / low * product;
    values[i++] = common * Complex(0, frequency);
    values[i++] = common * std::hypot(pole.distance, pole.centre);
    product *= std::conj(low) / low;
  }
}

}  // namespace bandwright
