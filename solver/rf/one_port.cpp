#include "solver/rf/one_port.h"

#include <limits>
#include <utility>
#include <variant>

#include "solver/rf/spline.h"

namespace bandwright {
namespace {

struct Sampled {
  Spline reflection;
  double reference_ohm;
};

}  // namespace

struct OnePort::Model {
  std::variant<Sampled, Circuit, Complex> form;

  const Sampled* sampled() const { return std::get_if<Sampled>(&form); }
};

OnePort OnePort::from_reflection(std::vector<double> frequency_hz, std::vector<Complex> reflection,
                                 double reference_ohm) {
  return OnePort(std::make_shared<const Model>(
      Model{Sampled{Spline(std::move(frequency_hz), std::move(reflection)), reference_ohm}}));
}

OnePort OnePort::from_circuit(Circuit circuit) {
  return OnePort(std::make_shared<const Model>(Model{std::move(circuit)}));
}

OnePort OnePort::constant(Complex impedance_ohm) {
  return OnePort(std::make_shared<const Model>(Model{impedance_ohm}));
}

double OnePort::first_hz() const {
  const std::span<const double> samples = sample_hz();
  return samples.empty() ? 0.0 : samples.front();
}

double OnePort::last_hz() const {
  const std::span<const double> samples = sample_hz();
  return samples.empty() ? std::numeric_limits<double>::infinity() : samples.back();
}

bool OnePort::covers(double frequency_hz) const {
  return frequency_hz > 0 && frequency_hz >= first_hz() && frequency_hz <= last_hz();
}

std::span<const double> OnePort::sample_hz() const {
  const Sampled* sampled = model_->sampled();
  return sampled ? sampled->reflection.knots() : std::span<const double>();
}

bool OnePort::is_constant() const {
  return std::holds_alternative<Complex>(model_->form);
}

Complex OnePort::constant_ohm() const {
  return std::get<Complex>(model_->form);
}

Wave OnePort::wave(double frequency_hz) const {
  if (const Sampled* sampled = model_->sampled()) {
    return Wave::from_reflection(sampled->reflection(frequency_hz), sampled->reference_ohm);
  }
  if (const Circuit* circuit = std::get_if<Circuit>(&model_->form)) {
    return circuit->wave(frequency_hz);
  }
  return {constant_ohm(), 1.0};
}

}  // namespace bandwright
