#include "solver/rf/touchstone_options.h"

#include <algorithm>
#include <array>
#include <optional>
#include <utility>

#include "solver/base/decimal.h"

namespace bandwright {
namespace {

template <class T, std::size_t N>
using Names = std::array<std::pair<std::string_view, T>, N>;

constexpr Names<int, 4> kUnits{{{"hz", 0}, {"khz", 3}, {"mhz", 6}, {"ghz", 9}}};
constexpr Names<NetworkParameter, 5> kParameters{{{"s", NetworkParameter::s},
                                                  {"y", NetworkParameter::y},
                                                  {"z", NetworkParameter::z},
                                                  {"h", NetworkParameter::h},
                                                  {"g", NetworkParameter::g}}};
constexpr Names<NumberFormat, 3> kFormats{{{"db", NumberFormat::decibel_angle},
                                           {"ma", NumberFormat::magnitude_angle},
                                           {"ri", NumberFormat::real_imaginary}}};

template <class T, std::size_t N>
std::optional<T> find(const Names<T, N>& names, const std::string& word) {
  const auto found =
      std::find_if(names.begin(), names.end(), [&](const auto& n) { return n.first == word; });
  if (found == names.end()) return std::nullopt;
  return found->second;
}

// Reads the items of one option line from left to right.
class OptionReader {
 public:
  OptionReader(const TextLine& line, FaultList& faults) : faults_(faults) {
    options_.line = line.number;
    words_ = words_of(line.text.substr(line.text.find('#') + 1));
  }

  TouchstoneOptions read() {
    while (next_ < words_.size()) {
      const std::string word = lower_case(words_[next_++]);
      if (word == "r") {
        read_resistances();
      } else if (const auto unit = find(kUnits, word)) {
        set(options_.unit_exponent, *unit, unit_seen_, "frequency unit");
      } else if (const auto parameter = find(kParameters, word)) {
        set(options_.parameter, *parameter, parameter_seen_, "parameter");
      } else if (const auto format = find(kFormats, word)) {
        set(options_.format, *format, format_seen_, "number format");
      } else {
        fault("found " + quoted_word(word) +
              " in the option line, wanted a unit (Hz kHz MHz GHz), a parameter (S Y Z H G), a "
              "format (DB MA RI) or R and a resistance");
      }
    }
    return std::move(options_);
  }

 private:
  void fault(std::string message) { faults_.add(options_.line, std::move(message)); }

  template <class T>
  void set(T& option, T value, bool& seen, const std::string& what) {
    if (seen) fault("the option line names a " + what + " twice");
    seen = true;
    option = value;
  }

  void read_resistances() {
    if (resistance_seen_) fault("the option line has R twice");
    resistance_seen_ = true;
    std::vector<double> ohms;
    for (; next_ < words_.size(); ++next_) {
      const std::optional<double> ohm = read_decimal(words_[next_]);
      if (!ohm) break;
      if (*ohm > 0) {
        ohms.push_back(*ohm);
      } else {
        fault("the reference resistance is " + quoted_word(words_[next_]) +
              ", wanted a number above 0 (a complex reference cannot be written)");
        ohms.push_back(50.0);
      }
    }
    if (ohms.empty()) {
      fault("R in the option line is not followed by a resistance in ohm, e.g. R 50");
      return;
    }
    if (ohms.size() > 1 && next_ < words_.size()) {
      fault("several reference resistances must end the option line, found " +
            quoted_word(words_[next_]) + " after them");
    }
    options_.reference_ohm = std::move(ohms);
  }

  FaultList& faults_;
  TouchstoneOptions options_;
  std::vector<std::string_view> words_;
  std::size_t next_ = 0;
  bool unit_seen_ = false;
  bool parameter_seen_ = false;
  bool format_seen_ = false;
  bool resistance_seen_ = false;
};

}  // namespace

bool is_option_line(const TextLine& line) {
  return line.text[line.text.find_first_not_of(" \t")] == '#';
}

TouchstoneOptions parse_option_line(const TextLine& line, FaultList& faults) {
  return OptionReader(line, faults).read();
}

}  // namespace bandwright
