#include "solver/rf/touchstone_version2.h"

#include <charconv>
#include <cmath>
#include <set>
#include <string>

#include "solver/rf/touchstone_keywords.h"
#include "solver/rf/touchstone_points.h"

namespace bandwright {
namespace {

constexpr std::size_t kNoiseNumbers = 5;

struct Count {
  std::size_t value = 0;
  int line = 0;
};

// What the keywords said. Whatever is missing or faulty is absent, with its fault in the list.
struct Header {
  std::optional<TouchstoneOptions> options;
  std::optional<Count> ports;
  std::optional<Count> frequencies;
  std::optional<Count> noise_frequencies;
  std::optional<bool> columns_first;  // two-port data order 21_12
  std::optional<Arrangement> format;
  std::vector<NumberWord> reference;
  int reference_line = 0;
};

// Sorts the lines of a text into its header and its two blocks of numbers.
class Version2Scanner {
 public:
  Version2Scanner(FaultList& faults) : faults_(faults) {}

  void scan(std::span<const TextLine> lines) {
    for (const TextLine& line : lines) {
      if (section_ == Section::information && !ends_information(line)) continue;
      if (section_ == Section::ended) {
        faults_.add(line.number, "found content after [End], which must be last");
        return;
      }
      if (is_keyword_line(line)) {
        on_keyword(line);
      } else if (is_option_line(line)) {
        on_option_line(line);
      } else {
        on_words(line);
      }
    }
    if (section_ == Section::information) {
      faults_.add(0, "[Begin Information] without [End Information]");
    } else if (section_ != Section::ended) {
      faults_.add(0, "[End] is missing: wanted as the last line");
    }
  }

  Header header;
  std::vector<NumberWord> network;
  std::vector<NumberWord> noise;
  int network_line = 0;
  int noise_line = 0;

 private:
  enum class Section { keywords, reference, skipped, information, network, noise, ended };

  static bool ends_information(const TextLine& line) {
    FaultList unused(1);
    if (!is_keyword_line(line)) return false;
    const std::optional<KeywordLine> parsed = parse_keyword(line, unused);
    return parsed && parsed->keyword == Keyword::end_information;
  }

  void on_option_line(const TextLine& line) {
    if (header.options) return;  // only the first one counts
    header.options = parse_option_line(line, faults_);
    if (header.options->reference_ohm.size() > 1) {
      faults_.add(line.number,
                  "several reference resistances belong to texts without keywords; wanted one "
                  "here and [Reference] for the ports");
    }
  }

  void on_words(const TextLine& line) {
    switch (section_) {
      case Section::reference:
        read_numbers(line, header.reference, faults_);
        return;
      case Section::network:
        read_numbers(line, network, faults_);
        return;
      case Section::noise:
        read_numbers(line, noise, faults_);
        return;
      case Section::skipped:
        return;
      case Section::keywords:
      case Section::information:
      case Section::ended:
        break;
    }
    faults_.add(line.number, "found " + quoted_word(words_of(line.text).front()) +
                                 ", wanted a keyword: data follow [Network Data]");
    section_ = Section::skipped;
  }

  void on_keyword(const TextLine& line) {
    const std::optional<KeywordLine> parsed = parse_keyword(line, faults_);
    if (!parsed) {
      section_ = Section::skipped;
      return;
    }
    const Keyword keyword = parsed->keyword;
    check_order(keyword, line.number);
    section_ = Section::keywords;
    read_keyword(*parsed, line.number);
    seen_.insert(keyword);
  }

  void check_order(Keyword keyword, int line) {
    const std::string name(keyword_name(keyword));
    const bool repeats =
        keyword == Keyword::begin_information || keyword == Keyword::end_information;
    if (!repeats && seen_.contains(keyword)) faults_.add(line, name + " stands here a second time");
    if (seen_.contains(Keyword::version) && !repeats && !header.options && !option_missed_) {
      faults_.add(line, "the option line must stand between [Version] and " + name);
      option_missed_ = true;
    }
    const bool may_precede_ports =
        keyword == Keyword::version || keyword == Keyword::number_of_ports || repeats;
    if (!may_precede_ports && !seen_.contains(Keyword::number_of_ports) && !ports_missed_) {
      faults_.add(line, "[Number of Ports] must stand before " + name);
      ports_missed_ = true;
    }
    const bool closing = keyword == Keyword::noise_data || keyword == Keyword::end;
    if (closing && !seen_.contains(Keyword::network_data)) {
      faults_.add(line, "[Network Data] must stand before " + name);
    } else if (!closing && keyword != Keyword::network_data &&
               seen_.contains(Keyword::network_data)) {
      faults_.add(line, name + " must stand before [Network Data]");
    }
  }

  void read_keyword(const KeywordLine& parsed, int line) {
    switch (parsed.keyword) {
      case Keyword::version:
        read_version(parsed, line);
        break;
      case Keyword::number_of_ports:
        header.ports = count(parsed, line, kMostPorts);
        break;
      case Keyword::number_of_frequencies:
        header.frequencies = count(parsed, line, kMostPoints);
        break;
      case Keyword::number_of_noise_frequencies:
        header.noise_frequencies = count(parsed, line, kMostPoints);
        break;
      case Keyword::two_port_data_order:
        read_order(parsed, line);
        break;
      case Keyword::matrix_format:
        read_format(parsed, line);
        break;
      case Keyword::reference:
        section_ = Section::reference;
        header.reference_line = line;
        for (const std::string_view word : parsed.arguments) {
          read_numbers({line, word}, header.reference, faults_);
        }
        return;
      case Keyword::mixed_mode_order:
        faults_.add(line,
                    "mixed-mode data ([Mixed-Mode Order]) are not read: wanted single-ended ports");
        section_ = Section::skipped;
        return;
      case Keyword::begin_information:
        section_ = Section::information;
        break;
      case Keyword::end_information:
        read_end_information(line);
        break;
      case Keyword::network_data:
        section_ = Section::network;
        network_line = line;
        break;
      case Keyword::noise_data:
        section_ = Section::noise;
        noise_line = line;
        break;
      case Keyword::end:
        section_ = Section::ended;
        break;
    }
  }

  void read_end_information(int line) {
    if (!seen_.contains(Keyword::begin_information)) {
      faults_.add(line, "[End Information] without [Begin Information]");
    }
    seen_.erase(Keyword::begin_information);
  }

  // The only argument of a keyword, in lower case; a fault and "" if there is not exactly one.
  std::string argument(const KeywordLine& parsed, int line, std::string_view wanted) {
    if (parsed.arguments.size() == 1) return lower_case(parsed.arguments.front());
    faults_.add(line, std::string(keyword_name(parsed.keyword)) + " wants " + std::string(wanted) +
                          ", found " + counted(parsed.arguments.size(), "word"));
    return {};
  }

  std::optional<Count> count(const KeywordLine& parsed, int line, std::size_t most) {
    const std::string wanted = "a whole number from 1 to " + std::to_string(most);
    const std::string word = argument(parsed, line, wanted);
    if (word.empty()) return std::nullopt;
    std::size_t value = 0;
    const auto read = std::from_chars(word.data(), word.data() + word.size(), value);
    const bool whole = read.ec == std::errc{} && read.ptr == word.data() + word.size();
    if (whole && value >= 1 && value <= most) return Count{value, line};
    faults_.add(line, std::string(keyword_name(parsed.keyword)) + " wants " + wanted + ", found " +
                          quoted_word(word));
    return std::nullopt;
  }

  void read_version(const KeywordLine& parsed, int line) {
    const std::string word = argument(parsed, line, "2.0 or 2.1");
    if (!word.empty() && word != "2.0" && word != "2.1") {
      faults_.add(line, "[Version] wants 2.0 or 2.1, found " + quoted_word(word));
    }
  }

  void read_order(const KeywordLine& parsed, int line) {
    const std::string word = argument(parsed, line, "12_21 or 21_12");
    if (word == "12_21" || word == "21_12") {
      header.columns_first = word == "21_12";
    } else if (!word.empty()) {
      faults_.add(line, "[Two-Port Data Order] wants 12_21 or 21_12, found " + quoted_word(word));
    }
    if (header.ports && header.ports->value != 2) {
      faults_.add(line, "[Two-Port Data Order] is for 2 ports, and this text has " +
                            counted(header.ports->value, "port"));
    }
  }

  void read_format(const KeywordLine& parsed, int line) {
    const std::string word = argument(parsed, line, "Full, Lower or Upper");
    if (word == "full") {
      header.format = Arrangement::rows;
    } else if (word == "lower") {
      header.format = Arrangement::lower;
    } else if (word == "upper") {
      header.format = Arrangement::upper;
    } else if (!word.empty()) {
      faults_.add(line, "[Matrix Format] wants Full, Lower or Upper, found " + quoted_word(word));
    }
  }

  FaultList& faults_;
  Section section_ = Section::keywords;
  std::set<Keyword> seen_;
  bool option_missed_ = false;
  bool ports_missed_ = false;
};

// One reference for each port: [Reference], or else the option line's.
std::vector<double> references(const Header& header, std::size_t ports, FaultList& faults) {
  const double plain = header.options ? header.options->reference_ohm.front() : 50.0;
  std::vector<double> ohms;
  for (const NumberWord& word : header.reference) {
    if (word.value <= 0) {
      faults.add(word.line, "the reference resistance is " + quoted_word(word.text) +
                                ", wanted a number above 0");
    }
    ohms.push_back(word.value > 0 ? word.value : plain);
  }
  if (header.reference_line > 0 && ohms.size() != ports) {
    faults.add(header.reference_line, "[Reference] holds " + counted(ohms.size(), "number") +
                                          ", wanted one for each of " + counted(ports, "port"));
  }
  ohms.resize(ports, plain);
  return ohms;
}

// Whether the block of numbers under `title` is as long as the counts ask for.
bool right_length(std::string_view title, int line, std::size_t found, std::size_t points,
                  std::size_t each, FaultList& faults) {
  if (found == points * each) return true;
  faults.add(line, std::string(title) + " holds " + counted(found, "number") + ", wanted " +
                       std::to_string(points * each) + ": " + std::to_string(each) +
                       " for each of " +
                       (points == 1 ? "1 frequency" : std::to_string(points) + " frequencies"));
  return false;
}

void check_noise(const Version2Scanner& text, const TouchstoneOptions& options, FaultList& faults) {
  const std::optional<Count>& count = text.header.noise_frequencies;
  if (text.noise_line > 0 && !count) {
    faults.add(text.noise_line, "[Noise Data] needs [Number of Noise Frequencies]");
  }
  if (text.noise_line == 0 && count) {
    faults.add(count->line, "[Number of Noise Frequencies] without [Noise Data]");
  }
  if (text.noise_line == 0 || !count) return;
  if (text.header.ports && text.header.ports->value != 2) {
    faults.add(text.noise_line, "[Noise Data] is for 2 ports");
  }
  if (!right_length("[Noise Data]", text.noise_line, text.noise.size(), count->value, kNoiseNumbers,
                    faults)) {
    return;
  }
  double last_hz = -1;
  for (std::size_t i = 0; i < text.noise.size(); i += kNoiseNumbers) {
    const double hz = frequency_of(text.noise[i], options, faults);
    check_increasing(last_hz, hz, text.noise[i].line, faults);
    if (!std::isnan(hz)) last_hz = hz;
  }
}

// Asks for every keyword that must be there.
void check_complete(const Version2Scanner& text, FaultList& faults) {
  const Header& header = text.header;
  if (!header.options) {
    faults.add(0, "there is no option line: wanted one that starts with # after [Version]");
  }
  if (!header.ports) faults.add(0, "[Number of Ports] is missing or faulty");
  if (!header.frequencies) faults.add(0, "[Number of Frequencies] is missing or faulty");
  if (text.network_line == 0) faults.add(0, "[Network Data] is missing");
  if (header.ports && header.ports->value == 2 && !header.columns_first) {
    faults.add(0, "[Two-Port Data Order] is missing or faulty: 2 ports need it");
  }
}

Arrangement arrangement_of(const Header& header) {
  const Arrangement format = header.format.value_or(Arrangement::rows);
  const bool columns = header.columns_first.value_or(false) && header.ports->value == 2;
  return format == Arrangement::rows && columns ? Arrangement::columns : format;
}

}  // namespace

std::optional<NetworkData> read_version2(std::span<const TextLine> lines, int ports,
                                         FaultList& faults) {
  Version2Scanner text(faults);
  text.scan(lines);
  const Header& header = text.header;
  check_complete(text, faults);
  const TouchstoneOptions options = header.options.value_or(TouchstoneOptions{});
  check_noise(text, options, faults);
  if (!header.ports || !header.frequencies || text.network_line == 0) return std::nullopt;

  const int n = static_cast<int>(header.ports->value);
  if (ports != 0 && ports != n) {
    faults.add(header.ports->line,
               "[Number of Ports] says " + std::to_string(n) + ", wanted " + std::to_string(ports));
  }
  if (n != 2 && is_hybrid(options.parameter)) {
    faults.add(options.line,
               "H and G parameters are of 2-ports, and this is a " + std::to_string(n) + "-port");
    return std::nullopt;
  }
  std::vector<double> reference_ohm = references(header, header.ports->value, faults);
  const Arrangement arrangement = arrangement_of(header);
  const std::size_t each = numbers_a_point(n, arrangement);
  if (!right_length("[Network Data]", text.network_line, text.network.size(),
                    header.frequencies->value, each, faults)) {
    return std::nullopt;
  }
  PointList points(n, arrangement, options, faults);
  for (std::size_t i = 0; i < text.network.size(); i += each) {
    points.add(std::span(text.network).subspan(i, each));
  }
  return points.scattering(std::move(reference_ohm), false);
}

}  // namespace bandwright
