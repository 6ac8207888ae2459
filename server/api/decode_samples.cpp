#include "server/api/decode_samples.h"

#include <cmath>
#include <string>

#include "server/api/limits.h"
#include "solver/rf/touchstone.h"

namespace bandwright {
namespace {

// Measured data of a reactive port may stand outside the unit circle by its rounding.
constexpr double kActiveTolerance = 1e-6;
constexpr double kReferenceOhm = 50;
constexpr AllowedRange kAnyFigure{-1e15, 1e15};

struct Form {
  std::string_view re;
  std::string_view im;
  Unit unit;
};
constexpr Form kForms[] = {{"z_re_ohm", "z_im_ohm", Unit::ohm},
                           {"s_re", "s_im", Unit::none},
                           {"y_re_s", "y_im_s", Unit::siemens}};

std::optional<std::vector<double>> decode_figures(const Node& node, Unit unit,
                                                  AllowedRange allowed) {
  const std::optional<std::vector<Node>> items = node.items(1, limits::kLoadPoints, "samples");
  if (!items) return std::nullopt;
  std::vector<double> figures;
  figures.reserve(items->size());
  for (const Node& item : *items) {
    if (const std::optional<double> figure = item.quantity(unit, allowed)) {
      figures.push_back(*figure);
    }
  }
  if (figures.size() != items->size()) return std::nullopt;
  return figures;
}

bool check_increasing(const Node& node, const std::vector<double>& frequency_hz) {
  for (std::size_t i = 1; i < frequency_hz.size(); ++i) {
    if (frequency_hz[i] > frequency_hz[i - 1]) continue;
    node.item(i).fault("not_increasing", shown(frequency_hz[i], Unit::hertz) + " follows " +
                                             shown(frequency_hz[i - 1], Unit::hertz) +
                                             "; frequencies must increase from sample to sample");
    return false;
  }
  return true;
}

// What is wrong with the reflection of sample `index`, if anything. `figure`: how it is written.
std::optional<std::string> passivity_fault(Complex reflection, PortRole role, std::size_t index,
                                           double frequency_hz) {
  const double magnitude = std::abs(reflection);
  const std::string where =
      "sample " + std::to_string(index + 1) + " (" + shown(frequency_hz, Unit::hertz) + ")";
  if (!(magnitude <= 1 + kActiveTolerance)) {
    const std::string size = std::isfinite(magnitude)
                                 ? "|S| = " + format_quantity(magnitude, Unit::none, 8)
                                 : "|S| is not finite";
    return where + ": " + size + "; a passive one-port has at most 1";
  }
  if (role == PortRole::source && magnitude >= 1) {
    return where + ": the source has no resistance, so no power is available from it";
  }
  return std::nullopt;
}

// Which of the forms the members belong to; exactly one must be there.
const Form* decode_form(const Node& samples) {
  const Form* found = nullptr;
  for (const Form& form : kForms) {
    if (!samples.has(form.re) && !samples.has(form.im)) continue;
    if (found) {
      samples.fault("conflict", "samples are given twice, as " + std::string(found->re) +
                                    " and as " + std::string(form.re) + "; keep one");
      return nullptr;
    }
    found = &form;
  }
  if (!found) {
    samples.fault("missing",
                  "samples need z_re_ohm and z_im_ohm, or s_re and s_im, or y_re_s and y_im_s");
  }
  return found;
}

std::optional<double> decode_reference(const Node& samples) {
  if (const std::optional<Node> reference = samples.find("reference_ohm")) {
    return reference->quantity(Unit::ohm, {1e-3, 1e6});
  }
  samples.assume_default("reference_ohm", "50 ohm");
  return kReferenceOhm;
}

Complex reflection_of(const Form& form, Complex figure, double reference_ohm) {
  if (form.unit == Unit::ohm) return reflection_from_impedance(figure, reference_ohm);
  if (form.unit == Unit::siemens) return reflection_from_admittance(figure, reference_ohm);
  return figure;
}

std::optional<std::vector<double>> decode_column(const Node& samples, std::string_view name,
                                                 Unit unit, AllowedRange allowed) {
  const std::optional<Node> column = samples.require(name, "one figure a sample");
  return column ? decode_figures(*column, unit, allowed) : std::nullopt;
}

bool check_length(const Node& samples, std::string_view name, std::size_t size,
                  std::size_t frequencies) {
  if (size == frequencies) return true;
  samples.member_fault(
      name, "length_mismatch",
      std::to_string(size) + " figures for " + std::to_string(frequencies) + " frequencies");
  return false;
}

std::optional<OnePort> checked_port(const Node& node, PortRole role,
                                    std::vector<double> frequency_hz,
                                    std::vector<Complex> reflection, double reference_ohm) {
  bool passive = true;
  for (std::size_t i = 0; i < reflection.size(); ++i) {
    if (auto fault = passivity_fault(reflection[i], role, i, frequency_hz[i])) {
      node.fault("active", *fault);
      passive = false;
    }
  }
  if (!passive) return std::nullopt;
  return OnePort::from_reflection(std::move(frequency_hz), std::move(reflection), reference_ohm);
}

}  // namespace

std::optional<OnePort> decode_samples(const Node& samples, PortRole role) {
  if (!samples.expect_object({"frequency_hz", "z_re_ohm", "z_im_ohm", "s_re", "s_im",
                              "reference_ohm", "y_re_s", "y_im_s"})) {
    return std::nullopt;
  }
  auto frequency_hz = decode_column(samples, "frequency_hz", Unit::hertz, kFrequencyHz);
  const bool increasing =
      frequency_hz && check_increasing(*samples.find("frequency_hz"), *frequency_hz);
  const std::optional<double> reference_ohm = decode_reference(samples);
  const Form* form = decode_form(samples);
  if (!form) return std::nullopt;
  const auto re = decode_column(samples, form->re, form->unit, kAnyFigure);
  const auto im = decode_column(samples, form->im, form->unit, kAnyFigure);
  if (!increasing || !reference_ohm || !re || !im) return std::nullopt;
  const bool equally_long = check_length(samples, form->re, re->size(), frequency_hz->size()) &
                            check_length(samples, form->im, im->size(), frequency_hz->size());
  if (!equally_long) return std::nullopt;
  std::vector<Complex> reflection(re->size());
  for (std::size_t i = 0; i < reflection.size(); ++i) {
    reflection[i] = reflection_of(*form, {(*re)[i], (*im)[i]}, *reference_ohm);
  }
  return checked_port(samples, role, std::move(*frequency_hz), std::move(reflection),
                      *reference_ohm);
}

std::optional<OnePort> decode_touchstone(const Node& node, PortRole role) {
  const Node text_node = *node.find("touchstone");
  const std::optional<std::string> text = text_node.text(limits::kTouchstoneBytes);
  if (!text) return std::nullopt;
  const auto parsed = parse_touchstone(*text);
  if (!parsed) {
    for (const TextFault& fault : parsed.error()) {
      const std::string line = fault.line > 0 ? "line " + std::to_string(fault.line) + ": " : "";
      text_node.fault("bad_touchstone", line + fault.message);
    }
    return std::nullopt;
  }
  const NetworkData& data = *parsed;
  std::int64_t port = 1;
  if (const std::optional<Node> port_node = node.find("port")) {
    const std::optional<std::int64_t> given = port_node->integer(1, data.ports);
    if (!given) return std::nullopt;
    port = *given;
  } else if (data.ports > 1) {
    node.assume_default("port", "1");
  }
  if (data.ports > 1) {
    text_node.context().note(text_node.pointer(),
                             "the other ports end in their reference resistance");
  }
  if (data.frequency_hz.size() > limits::kLoadPoints) {
    text_node.fault("too_many", std::to_string(data.frequency_hz.size()) +
                                    " frequencies; at most " + std::to_string(limits::kLoadPoints) +
                                    " are allowed");
    return std::nullopt;
  }
  std::vector<double> frequency_hz;
  std::vector<Complex> reflection;
  const int index = static_cast<int>(port) - 1;
  for (std::size_t i = 0; i < data.frequency_hz.size(); ++i) {
    if (data.frequency_hz[i] <= 0) {  // simulated data often begins there; no goal can use it
      text_node.context().note(text_node.pointer(), "the sample at 0 Hz is left out");
      continue;
    }
    frequency_hz.push_back(data.frequency_hz[i]);
    reflection.push_back(data.s(i, index, index));
  }
  if (frequency_hz.empty()) {
    text_node.fault("empty", "the text holds no sample above 0 Hz");
    return std::nullopt;
  }
  return checked_port(text_node, role, std::move(frequency_hz), std::move(reflection),
                      data.reference_ohm[static_cast<std::size_t>(index)]);
}

}  // namespace bandwright
