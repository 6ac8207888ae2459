// The keywords of Touchstone version 2 and how one is written: "[Number of Ports] 2".
#pragma once

#include <optional>
#include <string_view>
#include <vector>

#include "solver/rf/touchstone_text.h"

namespace bandwright {

enum class Keyword {
  version,
  number_of_ports,
  two_port_data_order,
  number_of_frequencies,
  number_of_noise_frequencies,
  reference,
  matrix_format,
  mixed_mode_order,
  begin_information,
  end_information,
  network_data,
  noise_data,
  end
};

struct KeywordLine {
  Keyword keyword = Keyword::end;
  std::vector<std::string_view> arguments;
};

// "[Number of Ports]".
std::string_view keyword_name(Keyword keyword);

// Whether `line` is meant as a keyword: its first word starts with a bracket.
bool is_keyword_line(const TextLine& line);

// Reads a keyword. A spelling that leaves no doubt (wrong blanks, wrong column) is a fault, but is
// read; nothing is returned for an unknown one, with a fault that lists what is known.
std::optional<KeywordLine> parse_keyword(const TextLine& line, FaultList& faults);

}  // namespace bandwright
