#include "solver/rf/touchstone_keywords.h"

#include <algorithm>
#include <array>
#include <string>

namespace bandwright {
namespace {

constexpr std::array<std::string_view, 13> kNames{"[Version]",
                                                  "[Number of Ports]",
                                                  "[Two-Port Data Order]",
                                                  "[Number of Frequencies]",
                                                  "[Number of Noise Frequencies]",
                                                  "[Reference]",
                                                  "[Matrix Format]",
                                                  "[Mixed-Mode Order]",
                                                  "[Begin Information]",
                                                  "[End Information]",
                                                  "[Network Data]",
                                                  "[Noise Data]",
                                                  "[End]"};

// The words of a keyword in lower case with one space between them. A dash parts words as a space
// does.
std::string canonical(std::string_view inside) {
  std::string spaced = lower_case(inside);
  std::replace(spaced.begin(), spaced.end(), '-', ' ');
  std::string out;
  for (const std::string_view word : words_of(spaced)) {
    if (!out.empty()) out += ' ';
    out += word;
  }
  return out;
}

std::string all_names() {
  std::string names;
  for (const std::string_view name : kNames)
    names += (names.empty() ? "" : " ") + std::string(name);
  return names;
}

}  // namespace

std::string_view keyword_name(Keyword keyword) {
  return kNames[static_cast<std::size_t>(keyword)];
}

bool is_keyword_line(const TextLine& line) {
  return line.text[line.text.find_first_not_of(" \t")] == '[';
}

std::optional<KeywordLine> parse_keyword(const TextLine& line, FaultList& faults) {
  const std::size_t open = line.text.find('[');
  const std::size_t close = line.text.find(']');
  if (close == std::string_view::npos) {
    faults.add(line.number,
               "a keyword without its closing bracket: " + quoted_word(line.text.substr(open)));
    return std::nullopt;
  }
  const std::string_view inside = line.text.substr(open + 1, close - open - 1);
  const std::string name = canonical(inside);
  const auto found = std::find_if(kNames.begin(), kNames.end(), [&](std::string_view known) {
    return canonical(known.substr(1, known.size() - 2)) == name;
  });
  if (found == kNames.end()) {
    faults.add(line.number, "unknown keyword " +
                                quoted_word(line.text.substr(open, close - open + 1)) +
                                ", wanted one of " + all_names());
    return std::nullopt;
  }
  if (open > 0) faults.add(line.number, std::string(*found) + " must start in column 1");
  if (inside.size() != name.size()) {
    faults.add(line.number, std::string(*found) +
                                " must be written with single spaces and none inside its brackets");
  }
  return KeywordLine{static_cast<Keyword>(found - kNames.begin()),
                     words_of(line.text.substr(close + 1))};
}

}  // namespace bandwright
