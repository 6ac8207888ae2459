// The daemon as a test runs it: on a free port, in a folder of its own.
#pragma once

#include <doctest/doctest.h>

#include <cstdint>
#include <cstdlib>
#include <filesystem>
#include <iterator>
#include <string>
#include <utility>
#include <vector>

#include "tests/server/app/child_process.h"
#include "tests/server/temp_dir.h"

namespace bandwright {

inline std::vector<std::string> serve_arguments(const std::filesystem::path& data,
                                                std::vector<std::string> more = {}) {
  std::vector<std::string> words = {
      "serve", "--listen", "127.0.0.1:0", "--data", data.string(), "--min-free-mib", "1"};
  words.insert(words.end(), std::make_move_iterator(more.begin()),
               std::make_move_iterator(more.end()));
  return words;
}

class Daemon {
 public:
  explicit Daemon(const std::filesystem::path& data, std::vector<std::string> more = {})
      : process(BANDWRIGHT_DAEMON, serve_arguments(data, std::move(more))) {
    const std::string line = process.wait_for_error_line("\"msg\":\"listening\"");
    const std::size_t at = line.find("\"port\":");
    REQUIRE_MESSAGE(at != std::string::npos, process.error_text);
    port = static_cast<std::uint16_t>(std::atoi(line.c_str() + at + 7));
  }

  ChildProcess process;
  std::uint16_t port = 0;
};

}  // namespace bandwright
