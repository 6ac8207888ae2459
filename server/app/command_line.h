// The command line as data. The flags of `serve` and their help are the rows of the option table.
#pragma once

#include <string>
#include <variant>

#include "server/config/config.h"

namespace bandwright {

struct ServeCommand {
  ConfigSources sources;
};

struct SolveCommand {
  std::string file;  // "-": standard input
  int threads = 0;   // 0: one a core
};

// Nothing left to do but to print: help, version, or what is wrong with the command line.
struct Answered {
  int exit_status = 0;
  std::string text;
};

using Command = std::variant<ServeCommand, SolveCommand, Answered>;

// Reads the environment and the file that --config names, too. Throws std::runtime_error if that
// file cannot be read.
Command read_command_line(int argc, const char* const* argv);

}  // namespace bandwright
