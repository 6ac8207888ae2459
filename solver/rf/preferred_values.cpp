#include "solver/rf/preferred_values.h"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <string>

namespace bandwright {
namespace {

constexpr std::array<Series, 7> kSeries{Series::e3,  Series::e6,  Series::e12, Series::e24,
                                        Series::e48, Series::e96, Series::e192};
constexpr std::array<std::string_view, 7> kNames{"E3", "E6", "E12", "E24", "E48", "E96", "E192"};

// IEC 60063 table 1, in hundredths. Eight of these differ from the rounded powers of ten.
constexpr std::array<int, 24> kE24{100, 110, 120, 130, 150, 160, 180, 200, 220, 240, 270, 300,
                                   330, 360, 390, 430, 470, 510, 560, 620, 680, 750, 820, 910};

// The figures of one decade in hundredths. E3, E6 and E12 are every eighth, fourth and second
// value of E24. The three-digit series are the rounded powers of ten with one exception: the
// standard has 9.20 where the formula gives 9.19.
std::vector<int> make_hundredths(Series series) {
  const std::size_t index = static_cast<std::size_t>(series);
  std::vector<int> figures;
  if (series <= Series::e24) {
    const std::size_t step = std::size_t{8} >> index;
    for (std::size_t i = 0; i < kE24.size(); i += step) figures.push_back(kE24[i]);
    return figures;
  }
  const int count = 48 << (index - static_cast<std::size_t>(Series::e48));
  for (int i = 0; i < count; ++i) {
    const int figure = static_cast<int>(std::lround(100.0 * std::pow(10.0, double(i) / count)));
    figures.push_back(figure == 919 ? 920 : figure);
  }
  return figures;
}

struct Decade {
  std::vector<int> hundredths;
  std::vector<double> values;
};

const Decade& decade_of(Series series) {
  static const std::array<Decade, 7> kDecades = [] {
    std::array<Decade, 7> decades;
    for (const Series s : kSeries) {
      Decade& decade = decades[static_cast<std::size_t>(s)];
      decade.hundredths = make_hundredths(s);
      for (const int figure : decade.hundredths) decade.values.push_back(figure / 100.0);
    }
    return decades;
  }();
  return kDecades[static_cast<std::size_t>(series)];
}

// The double closest to hundredths * 10^(exponent - 2); nothing if it is outside the range.
std::optional<double> decimal(int hundredths, int exponent) {
  const std::string text = std::to_string(hundredths) + "e" + std::to_string(exponent - 2);
  double value = 0;
  const auto read = std::from_chars(text.data(), text.data() + text.size(), value);
  if (read.ec != std::errc{}) return std::nullopt;
  return value;
}

}  // namespace

std::string_view series_name(Series series) {
  return kNames[static_cast<std::size_t>(series)];
}

std::optional<Series> series_from_name(std::string_view name) {
  const auto found = std::find(kNames.begin(), kNames.end(), name);
  if (found == kNames.end()) return std::nullopt;
  return kSeries[static_cast<std::size_t>(found - kNames.begin())];
}

std::span<const Series> all_series() {
  return kSeries;
}

std::span<const double> decade(Series series) {
  return decade_of(series).values;
}

std::vector<double> preferred_values(Series series, double min, double max) {
  const std::vector<int>& figures = decade_of(series).hundredths;
  // One decade more on either side: the logarithm of a power of ten may round either way.
  const int first = static_cast<int>(std::floor(std::log10(min))) - 1;
  const int last = static_cast<int>(std::floor(std::log10(max))) + 1;
  std::vector<double> values;
  for (int exponent = first; exponent <= last; ++exponent) {
    for (const int figure : figures) {
      const std::optional<double> value = decimal(figure, exponent);
      if (value && *value >= min && *value <= max) values.push_back(*value);
    }
  }
  return values;
}

}  // namespace bandwright
