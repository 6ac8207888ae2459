#include "solver/limit/port_nodes.h"

#include <algorithm>
#include <cmath>

namespace bandwright {
namespace {

// The impedance in the mean of its logarithm: the reference at which the reflection is least
// crowded at the edge of the chart. The limit is the same at any.
double mean_impedance_ohm(const OnePort& port, const std::vector<QuadratureNode>& nodes) {
  double sum = 0;
  double weight = 0;
  for (const QuadratureNode& node : nodes) {
    const Wave wave = port.wave(node.frequency_hz);
    const double log = std::log(std::abs(wave.voltage) / std::abs(wave.current));
    if (!std::isfinite(log)) continue;
    sum += node.weight_hz * log;
    weight += node.weight_hz;
  }
  return weight > 0 ? std::exp(sum / weight) : 1;
}

}  // namespace

std::optional<std::vector<LoadNode>> port_nodes(const PortView& view,
                                                const std::vector<SpacedBand>& bands,
                                                double unit_hz) {
  std::vector<QuadratureNode> nodes;
  for (const SpacedBand& band : bands) {
    const auto more = band_nodes(band, view.port.sample_hz());
    nodes.insert(nodes.end(), more.begin(), more.end());
  }
  const double reference_ohm = mean_impedance_ohm(view.port, nodes);
  std::vector<LoadNode> read;
  for (const QuadratureNode& node : nodes) {
    const Wave wave = view.port.wave(node.frequency_hz);
    // From the power, not from the reflection, which rounds near the edge of the chart.
    const double absorbed = 4 * reference_ohm * std::real(wave.voltage * std::conj(wave.current)) /
                            std::norm(wave.voltage + reference_ohm * wave.current);
    if (!(absorbed > 0)) return std::nullopt;
    const Complex reflection = wave.reflection(reference_ohm);
    read.push_back({node.frequency_hz / unit_hz, node.weight_hz / unit_hz,
                    view.conjugate ? std::conj(reflection) : reflection, std::min(absorbed, 1.0)});
  }
  return read;
}

}  // namespace bandwright
