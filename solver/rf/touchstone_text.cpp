#include "solver/rf/touchstone_text.h"

#include <algorithm>
#include <limits>

#include "solver/base/decimal.h"

namespace bandwright {
namespace {

constexpr std::string_view kBlanks = " \t";

}  // namespace

std::vector<TextFault> FaultList::sorted() const {
  std::vector<TextFault> sorted = faults_;
  const auto place = [](const TextFault& fault) {
    return fault.line > 0 ? fault.line : std::numeric_limits<int>::max();
  };
  std::stable_sort(sorted.begin(), sorted.end(),
                   [&](const TextFault& a, const TextFault& b) { return place(a) < place(b); });
  return sorted;
}

std::vector<TextLine> content_lines(std::string_view text) {
  std::vector<TextLine> lines;
  if (text.starts_with("\xEF\xBB\xBF")) text.remove_prefix(3);  // a byte order mark is no content
  for (int number = 1; !text.empty(); ++number) {
    const std::size_t end = std::min(text.find_first_of("\r\n"), text.size());
    const std::string_view whole = text.substr(0, end);
    text.remove_prefix(end);
    text.remove_prefix(text.starts_with("\r\n") ? 2 : text.empty() ? 0 : 1);
    const std::string_view content = whole.substr(0, whole.find('!'));
    if (content.find_first_not_of(kBlanks) != std::string_view::npos) {
      lines.push_back({number, content});
    }
  }
  return lines;
}

std::vector<std::string_view> words_of(std::string_view line) {
  std::vector<std::string_view> words;
  for (;;) {
    const std::size_t start = line.find_first_not_of(kBlanks);
    if (start == std::string_view::npos) return words;
    line.remove_prefix(start);
    const std::size_t length = std::min(line.find_first_of(kBlanks), line.size());
    words.push_back(line.substr(0, length));
    line.remove_prefix(length);
  }
}

std::string lower_case(std::string_view text) {
  std::string lower(text);
  for (char& c : lower) {
    if (c >= 'A' && c <= 'Z') c = static_cast<char>(c - 'A' + 'a');
  }
  return lower;
}

std::string quoted_word(std::string_view word) {
  constexpr std::size_t kLongest = 30;
  std::string out = "\"";
  for (const char c : word.substr(0, kLongest)) out += c >= 0x20 && c < 0x7F ? c : '?';
  return out + (word.size() > kLongest ? "...\"" : "\"");
}

void read_numbers(const TextLine& line, std::vector<NumberWord>& numbers, FaultList& faults) {
  for (const std::string_view word : words_of(line.text)) {
    const std::optional<double> value = read_decimal(word);
    if (!value) faults.add(line.number, "found " + quoted_word(word) + ", wanted a finite number");
    numbers.push_back(
        {word, line.number, value.value_or(std::numeric_limits<double>::quiet_NaN())});
  }
}

std::string counted(std::size_t count, std::string_view noun) {
  return std::to_string(count) + " " + std::string(noun) + (count == 1 ? "" : "s");
}

}  // namespace bandwright
