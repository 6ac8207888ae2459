// One row an option: the only place where its name, range, default and meaning are written.
#pragma once

#include <cstdint>
#include <span>
#include <string>
#include <string_view>
#include <variant>

#include "server/config/config.h"

namespace bandwright {

struct Option {
  using Member = std::variant<std::int64_t Config::*, std::string Config::*>;

  std::string_view key;  // "max-body-bytes": flag --max-body-bytes, BANDWRIGHT_MAX_BODY_BYTES
  Member member;         // its type is the option's type
  std::string_view default_value;
  std::int64_t least = 0;  // of a number
  std::int64_t most = 0;
  std::string_view choices;  // of a text: "a b c"; empty: any
  std::string_view unit;
  std::string_view sentence;
};

std::span<const Option> option_table();

// "BANDWRIGHT_MAX_BODY_BYTES"
std::string environment_name(const Option& option);
// "How much ... (bytes, 1 to 5, default 3, BANDWRIGHT_...)"
std::string option_help(const Option& option);

}  // namespace bandwright
