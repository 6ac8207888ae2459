#include "solver/rf/response.h"

#include <algorithm>
#include <cmath>

#include "solver/rf/element_model.h"

namespace bandwright {
namespace {

double real_power(Complex voltage, Complex current) {
  return (voltage * std::conj(current)).real();
}

// One element in front of `wave`, towards the source.
Wave add_element(const Slot& slot, Complex impedance_ohm, Wave wave) {
  if (slot.place == Place::series) {
    wave.voltage += impedance_ohm * wave.current;
  } else {
    wave.current += wave.voltage / impedance_ohm;
  }
  return wave;
}

}  // namespace

PortResponse respond(const Topology& topology, const Values& values, const OnePort& source,
                     const OnePort& load, double frequency_hz) {
  Wave wave = load.wave(frequency_hz);
  const double load_power = real_power(wave.voltage, wave.current);
  for (std::size_t i = topology.slots.size(); i-- > 0;) {
    const Slot& slot = topology.slots[i];
    wave = add_element(slot, element_impedance_ohm(slot, values[i], frequency_hz), wave);
  }
  const Complex zs = source.impedance_ohm(frequency_hz);
  const Complex sum = wave.voltage + zs * wave.current;
  PortResponse out;
  out.reflection = (wave.voltage - std::conj(zs) * wave.current) / sum;
  out.transducer_gain = 4 * zs.real() * load_power / std::norm(sum);
  const double accepted = real_power(wave.voltage, wave.current);
  out.efficiency = accepted > 0 ? std::clamp(load_power / accepted, 0.0, 1.0) : 0.0;
  return out;
}

DrivenState drive(const Topology& topology, const Values& values, const OnePort& source,
                  const OnePort& load, double frequency_hz, double available_w) {
  const std::size_t n = topology.slots.size();
  DrivenState out;
  out.elements.resize(n);
  Wave wave = load.wave(frequency_hz);
  const Wave at_load = wave;
  for (std::size_t i = n; i-- > 0;) {
    const Slot& slot = topology.slots[i];
    const Complex z = element_impedance_ohm(slot, values[i], frequency_hz);
    ElementState& state = out.elements[i];
    state.current_a = slot.place == Place::series ? wave.current : wave.voltage / z;
    state.voltage_v = state.current_a * z;
    wave = add_element(slot, z, wave);
  }
  // Scale everything so that the source has the stated available power, |E|^2 / (8 Re Zs) with
  // peak amplitudes.
  const Complex zs = source.impedance_ohm(frequency_hz);
  const double emf = std::sqrt(8 * zs.real() * available_w);
  const double scale = emf / std::abs(wave.voltage + zs * wave.current);
  for (ElementState& state : out.elements) {
    state.voltage_v *= scale;
    state.current_a *= scale;
    state.dissipated_w = 0.5 * real_power(state.voltage_v, state.current_a);
  }
  out.load_w = 0.5 * scale * scale * real_power(at_load.voltage, at_load.current);
  out.accepted_w = 0.5 * scale * scale * real_power(wave.voltage, wave.current);
  return out;
}

}  // namespace bandwright
