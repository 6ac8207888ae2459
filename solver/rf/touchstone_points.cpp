#include "solver/rf/touchstone_points.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>
#include <optional>

#include "solver/base/decimal.h"
#include "solver/base/quantity.h"
#include "solver/rf/touchstone_scattering.h"

namespace bandwright {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

bool has_nan(const Complex& value) {
  return std::isnan(value.real()) || std::isnan(value.imag());
}

// `entries` in the order of the text, as a square matrix row by row.
std::vector<Complex> square(const std::vector<Complex>& entries, int ports,
                            Arrangement arrangement) {
  std::vector<Complex> matrix(static_cast<std::size_t>(ports) * ports);
  std::size_t next = 0;
  for (int i = 0; i < ports; ++i) {
    const int first = arrangement == Arrangement::upper ? i : 0;
    const int last = arrangement == Arrangement::lower ? i : ports - 1;
    for (int j = first; j <= last; ++j) {
      const Complex value = entries[next++];
      const std::size_t here = static_cast<std::size_t>(i) * ports + j;
      const std::size_t mirrored = static_cast<std::size_t>(j) * ports + i;
      if (arrangement != Arrangement::columns) matrix[here] = value;
      if (arrangement != Arrangement::rows) matrix[mirrored] = value;
    }
  }
  return matrix;
}

}  // namespace

std::size_t numbers_a_point(int ports, Arrangement arrangement) {
  const std::size_t n = static_cast<std::size_t>(ports);
  const bool triangle = arrangement == Arrangement::lower || arrangement == Arrangement::upper;
  return triangle ? n * n + n + 1 : 2 * n * n + 1;
}

double frequency_of(const NumberWord& word, const TouchstoneOptions& options, FaultList& faults) {
  if (std::isnan(word.value)) return kNaN;
  const std::optional<double> hz = read_decimal(word.text, options.unit_exponent);
  if (hz && *hz >= 0) return *hz;
  faults.add(word.line, "the frequency " + quoted_word(word.text) + " is negative or too large");
  return kNaN;
}

void check_increasing(double last_hz, double next_hz, int line, FaultList& faults) {
  if (next_hz <= last_hz) {
    faults.add(line, "the frequency " + format_quantity(next_hz, Unit::hertz, 9) +
                         " does not follow " + format_quantity(last_hz, Unit::hertz, 9) +
                         ": frequencies must increase");
  }
}

Complex PointList::entry(const NumberWord& first, const NumberWord& second) {
  if (std::isnan(first.value) || std::isnan(second.value)) return {kNaN, kNaN};
  Complex value(first.value, second.value);
  if (options_.format != NumberFormat::real_imaginary) {
    const double magnitude = options_.format == NumberFormat::decibel_angle
                                 ? std::pow(10.0, first.value / 20.0)
                                 : first.value;
    const double angle = std::fmod(second.value, 360.0) * std::numbers::pi / 180.0;
    value = {magnitude * std::cos(angle), magnitude * std::sin(angle)};
  }
  if (std::isfinite(value.real()) && std::isfinite(value.imag())) return value;
  faults_.add(first.line, "the value " + quoted_word(first.text) + " dB is too large");
  return {kNaN, kNaN};
}

void PointList::add(std::span<const NumberWord> numbers) {
  const int line = numbers.front().line;
  if (size() == kMostPoints) {
    faults_.add(line, "more than " + std::to_string(kMostPoints) + " frequencies");
  }
  const double hz = frequency_of(numbers.front(), options_, faults_);
  check_increasing(last_hz_, hz, line, faults_);
  if (!std::isnan(hz)) last_hz_ = hz;
  frequency_hz_.push_back(hz);
  lines_.push_back(line);
  std::vector<Complex> entries;
  for (std::size_t i = 1; i + 1 < numbers.size(); i += 2) {
    entries.push_back(entry(numbers[i], numbers[i + 1]));
  }
  const std::vector<Complex> matrix = square(entries, ports_, arrangement_);
  matrices_.insert(matrices_.end(), matrix.begin(), matrix.end());
}

NetworkData PointList::scattering(std::vector<double> reference_ohm, bool normalised) {
  NetworkData data{ports_, std::move(frequency_hz_), std::move(reference_ohm),
                   std::move(matrices_)};
  const std::vector<double> unit(static_cast<std::size_t>(ports_), 1.0);
  const std::size_t entries = static_cast<std::size_t>(ports_) * ports_;
  for (std::size_t k = 0; k < data.frequency_hz.size(); ++k) {
    const std::span<Complex> matrix(data.scattering.data() + k * entries, entries);
    // A value that could not be read has its fault already.
    if (std::any_of(matrix.begin(), matrix.end(), has_nan)) continue;
    if (!to_scattering(options_.parameter, normalised ? unit : data.reference_ohm, matrix)) {
      faults_.add(lines_[k],
                  "this matrix has no scattering form: it is that of an active network that "
                  "oscillates, or its values are out of all proportion");
    }
  }
  return data;
}

}  // namespace bandwright
