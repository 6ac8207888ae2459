#include "solver/rf/points.h"

#include <algorithm>
#include <cmath>

namespace bandwright {
namespace {

// Below this share of the wave's size a load counts as taking in no power, and its wave is scaled
// so that the gain reads about -160 dB.
constexpr double kNoPower = 1e-14;
constexpr double kNoPowerScale = 1e8;

int padded_count(std::size_t count) {
  return static_cast<int>((count + kLanes - 1) / kLanes * kLanes);
}

struct ScaledWave {
  Wave wave;
  bool passive = true;
};

ScaledWave scaled_wave(const OnePort& load, double frequency_hz, Complex source_ohm) {
  Wave wave = load.wave(frequency_hz);
  const double power = (wave.voltage * std::conj(wave.current)).real();
  const double size = std::abs(wave.voltage) * std::abs(wave.current);
  if (!(power > kNoPower * size)) {
    const double scale = kNoPowerScale / std::sqrt(source_ohm.real() * size);
    return {{wave.voltage * scale, wave.current * scale}, false};
  }
  const double scale = 1 / std::sqrt(4 * source_ohm.real() * power);
  return {{wave.voltage * scale, wave.current * scale}, true};
}

}  // namespace

PointSet::PointSet(const Problem& problem, const GoalGrid& grid) : goals(problem.goals) {
  for (std::size_t g = 0; g < goals.size(); ++g) {
    for (std::size_t l = 0; l < problem.loads.size(); ++l) {
      Segment segment{static_cast<int>(g), static_cast<int>(l), points,
                      static_cast<int>(grid[g].size()), padded_count(grid[g].size())};
      points += segment.padded;
      real_points += segment.count;
      segments.push_back(segment);
    }
  }
  frequency_hz.resize(points);
  for (AlignedArray* array :
       {&voltage_re, &voltage_im, &current_re, &current_im, &source_re, &source_im, &real}) {
    *array = AlignedArray(points);
  }
  for (const Segment& segment : segments) {
    for (int k = 0; k < segment.padded; ++k) {
      const int at = segment.first + k;
      const double f = grid[segment.goal][std::min(k, segment.count - 1)];
      const Complex zs = problem.source.impedance_ohm(f);
      const ScaledWave scaled = scaled_wave(problem.loads[segment.load].port, f, zs);
      frequency_hz[at] = f;
      voltage_re[at] = scaled.wave.voltage.real();
      voltage_im[at] = scaled.wave.voltage.imag();
      current_re[at] = scaled.wave.current.real();
      current_im[at] = scaled.wave.current.imag();
      source_re[at] = zs.real();
      source_im[at] = zs.imag();
      real[at] = k < segment.count ? 1 : 0;
      source_real = source_real && zs.imag() == 0;
      load_passive = load_passive && scaled.passive;
    }
  }
}

GoalGrid even_grid(const std::vector<Goal>& goals, int per_band) {
  GoalGrid grid;
  for (const Goal& goal : goals) {
    std::vector<double> band;
    const int count = goal.from_hz == goal.to_hz ? 1 : std::max(2, per_band);
    for (int k = 0; k < count; ++k) {
      const double t = count == 1 ? 0.0 : static_cast<double>(k) / (count - 1);
      band.push_back(k + 1 == count ? goal.to_hz : goal.from_hz + t * (goal.to_hz - goal.from_hz));
    }
    grid.push_back(std::move(band));
  }
  return grid;
}

}  // namespace bandwright
