// The lowest layer of the Touchstone reader: lines, words, numbers and the list of faults.
//
// A line ends with LF, CRLF or a lone CR; a comment runs from "!" to the end of its line. Comments
// may hold any bytes; everything else must read as US-ASCII words. Case never matters.
#pragma once

#include <cstddef>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "solver/rf/touchstone.h"

namespace bandwright {

// One line with something on it, its comment removed.
struct TextLine {
  int number = 0;  // from 1
  std::string_view text;
};

// A word of the data that should be a number. `value` is NaN if it is not one; that is then in the
// list of faults already.
struct NumberWord {
  std::string_view text;
  int line = 0;
  double value = 0;
};

// Keeps the first `most` faults.
class FaultList {
 public:
  explicit FaultList(std::size_t most) : most_(most > 0 ? most : 1) {}
  void add(int line, std::string message) {
    if (faults_.size() < most_) faults_.push_back({line, std::move(message)});
  }
  bool empty() const { return faults_.empty(); }
  // In the order of lines, what concerns the whole text last.
  std::vector<TextFault> sorted() const;

 private:
  std::size_t most_;
  std::vector<TextFault> faults_;
};

// All lines of `text` that hold more than blanks and a comment.
std::vector<TextLine> content_lines(std::string_view text);

// The words of a line, parted by blanks and tabs.
std::vector<std::string_view> words_of(std::string_view line);

std::string lower_case(std::string_view text);

// `word` in quotation marks, cut and masked so that a message stays short and printable.
std::string quoted_word(std::string_view word);

// Appends the numbers of `line` to `numbers`; a word that is none becomes NaN and a fault.
void read_numbers(const TextLine& line, std::vector<NumberWord>& numbers, FaultList& faults);

// "1 number", "9 numbers".
std::string counted(std::size_t count, std::string_view noun);

}  // namespace bandwright
