#include "solver/rf/touchstone_version1.h"

#include <algorithm>
#include <cmath>
#include <string>
#include <vector>

#include "solver/rf/touchstone_points.h"

namespace bandwright {
namespace {

constexpr std::size_t kMostPairsALine = 4;
constexpr std::size_t kNoiseNumbers = 5;

// The lines of one point: the first has an odd count of numbers, the others even ones.
struct PointLines {
  std::vector<NumberWord> numbers;
  std::vector<std::size_t> counts;  // numbers on each line
  std::vector<int> lines;
};

struct Content {
  std::optional<TouchstoneOptions> options;
  std::vector<PointLines> points;
};

void add_data_line(const TextLine& line, Content& content, FaultList& faults) {
  std::vector<NumberWord> numbers;
  read_numbers(line, numbers, faults);
  if (numbers.size() % 2 == 1) {
    content.points.emplace_back();
  } else if (content.points.empty()) {
    faults.add(line.number, "found " + counted(numbers.size(), "number") +
                                ", wanted a frequency and then pairs of numbers");
    return;
  }
  PointLines& point = content.points.back();
  point.numbers.insert(point.numbers.end(), numbers.begin(), numbers.end());
  point.counts.push_back(numbers.size());
  point.lines.push_back(line.number);
}

Content sort_lines(std::span<const TextLine> lines, FaultList& faults) {
  Content content;
  bool early_data = false;
  for (const TextLine& line : lines) {
    if (is_option_line(line)) {
      // Only the first option line counts, in all versions.
      if (!content.options) content.options = parse_option_line(line, faults);
    } else if (line.text.find_first_not_of(" \t") == line.text.find('[')) {
      faults.add(line.number,
                 "a keyword in a text without [Version]: keywords need \"[Version] 2.0\" as the "
                 "first line");
    } else {
      if (!content.options && !early_data) {
        faults.add(line.number,
                   "data before the option line: wanted a line that starts with #, e.g. "
                   "\"# MHz S RI R 50\"");
        early_data = true;
      }
      add_data_line(line, content, faults);
    }
  }
  if (!content.options && !early_data) {
    faults.add(0,
               "there is no option line: wanted a line that starts with #, e.g. "
               "\"# MHz S RI R 50\"");
  }
  if (content.points.empty()) faults.add(0, "there are no data lines");
  return content;
}

// The port count whose matrices have the first point's size; 0, with a fault, if none has.
int ports_from_shape(const PointLines& first, FaultList& faults) {
  const std::size_t pairs = (first.numbers.size() - 1) / 2;
  for (int n = 1; n <= kMostPorts; ++n) {
    if (static_cast<std::size_t>(n) * n == pairs) return n;
  }
  faults.add(first.lines.front(), "the first point has " + counted(pairs, "pair") +
                                      " of numbers; N ports need N*N of them (1, 4, 9, ... up to " +
                                      std::to_string(kMostPorts * kMostPorts) + ")");
  return 0;
}

// Reads the points of one text, all of the same port count.
class Version1Reader {
 public:
  Version1Reader(int ports, const TouchstoneOptions& options, FaultList& faults)
      : ports_(ports),
        wanted_(numbers_a_point(ports, Arrangement::rows)),
        options_(options),
        faults_(faults),
        points_(ports, ports == 2 ? Arrangement::columns : Arrangement::rows, options, faults) {}

  void add(const PointLines& point) {
    if (noise_ || starts_noise(point)) {
      add_noise(point);
    } else if (ports_ <= 2 ? fits_one_line(point) : fits_rows(point)) {
      points_.add(point.numbers);
    }
  }

  bool full() const { return points_.size() > kMostPoints; }

  NetworkData data(std::vector<double> reference_ohm) {
    return points_.scattering(std::move(reference_ohm), true);
  }

 private:
  bool starts_noise(const PointLines& point) {
    if (ports_ != 2 || points_.size() == 0 || point.counts.front() != kNoiseNumbers) return false;
    noise_ = frequency_of(point.numbers.front(), options_, faults_) <= points_.last_hz();
    return noise_;
  }

  void add_noise(const PointLines& point) {
    if (point.numbers.size() != kNoiseNumbers) {
      faults_.add(point.lines.front(),
                  "found " + counted(point.numbers.size(), "number") +
                      " in the noise data, wanted 5: frequency, NFmin, |Gopt|, angle, Rn");
      return;
    }
    const double hz = frequency_of(point.numbers.front(), options_, faults_);
    check_increasing(last_noise_hz_, hz, point.lines.front(), faults_);
    if (!std::isnan(hz)) last_noise_hz_ = hz;
  }

  bool fits_one_line(const PointLines& point) {
    if (point.counts.size() == 1 && point.counts.front() == wanted_) return true;
    const bool several = point.counts.front() == wanted_;
    faults_.add(point.lines[several ? 1 : 0],
                "found " + counted(point.counts[several ? 1 : 0], "number") + ", wanted " +
                    (ports_ == 1 ? "3 a line: the frequency and the pair N11"
                                 : "9 a line: the frequency and the pairs N11 N21 N12 N22"));
    return false;
  }

  bool fits_rows(const PointLines& point) {
    const std::size_t row = 2 * static_cast<std::size_t>(ports_);
    std::size_t filled = 0;  // numbers of the current row
    std::size_t rows = 0;
    for (std::size_t i = 0; i < point.counts.size(); ++i) {
      const std::size_t count = point.counts[i] - (i == 0 ? 1 : 0);
      if (count > 2 * kMostPairsALine) {
        faults_.add(point.lines[i],
                    "found " + counted(count / 2, "pair") + " on a line, wanted at most 4");
        return false;
      }
      filled += count;
      if (filled > row) {
        faults_.add(point.lines[i], "a row of " + counted(ports_, "pair") +
                                        " ends inside this line: each row must start a line");
        return false;
      }
      if (filled == row) {
        ++rows;
        filled = 0;
      }
    }
    if (point.numbers.size() == wanted_) return true;
    faults_.add(point.lines.front(), "the point that starts here has " +
                                         counted(rows, "whole row") + ", wanted " +
                                         counted(ports_, "row") + " of " + counted(ports_, "pair"));
    return false;
  }

  int ports_;
  std::size_t wanted_;
  TouchstoneOptions options_;
  FaultList& faults_;
  PointList points_;
  bool noise_ = false;
  double last_noise_hz_ = -1;
};

// One reference for each port; a single one is that of all.
std::vector<double> references(const TouchstoneOptions& options, int ports, FaultList& faults) {
  std::vector<double> ohms = options.reference_ohm;
  if (ohms.size() == 1) return std::vector<double>(static_cast<std::size_t>(ports), ohms.front());
  if (ohms.size() != static_cast<std::size_t>(ports)) {
    faults.add(options.line, "found " + counted(ohms.size(), "reference resistance") + " for " +
                                 counted(ports, "port") + ", wanted one, or one for each port");
    ohms.resize(static_cast<std::size_t>(ports), ohms.back());
  }
  return ohms;
}

}  // namespace

std::optional<NetworkData> read_version1(std::span<const TextLine> lines, int ports,
                                         FaultList& faults) {
  const Content content = sort_lines(lines, faults);
  if (content.points.empty()) return std::nullopt;
  if (ports == 0) ports = ports_from_shape(content.points.front(), faults);
  if (ports == 0) return std::nullopt;
  const TouchstoneOptions options = content.options.value_or(TouchstoneOptions{});
  std::vector<double> reference_ohm = references(options, ports, faults);
  if (ports != 2 && is_hybrid(options.parameter)) {
    faults.add(options.line, "H and G parameters are of 2-ports, and this is a " +
                                 std::to_string(ports) + "-port");
    return std::nullopt;
  }
  Version1Reader reader(ports, options, faults);
  for (const PointLines& point : content.points) {
    reader.add(point);
    if (reader.full()) break;
  }
  return reader.data(std::move(reference_ohm));
}

}  // namespace bandwright
