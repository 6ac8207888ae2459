#include "server/app/command_line.h"

#include <unistd.h>

#include <CLI/CLI.hpp>
#include <sstream>
#include <utility>
#include <vector>

#include "server/app/read_text.h"
#include "server/config/option_table.h"

namespace bandwright {
namespace {

constexpr int kExitUsage = 64;
constexpr int kMostThreads = 1024;

void add_table_options(CLI::App& serve, Settings& flags) {
  for (const Option& option : option_table()) {
    const std::string key(option.key);
    const bool is_number = std::holds_alternative<std::int64_t Config::*>(option.member);
    serve
        .add_option_function<std::string>(
            "--" + key, [&flags, key](const std::string& value) { flags[key] = value; },
            option_help(option))
        ->type_name(is_number ? "N" : "TEXT");
  }
}

std::vector<std::pair<std::string, std::string>> whole_environment() {
  std::vector<std::pair<std::string, std::string>> variables;
  for (char** entry = environ; *entry != nullptr; ++entry) {
    const std::string text = *entry;
    const std::size_t equals = text.find('=');
    if (equals != std::string::npos) {
      variables.emplace_back(text.substr(0, equals), text.substr(equals + 1));
    }
  }
  return variables;
}

Answered answer(const CLI::App& app, const CLI::ParseError& outcome) {
  std::ostringstream text;
  const int status = app.exit(outcome, text, text);
  return {status == 0 ? 0 : kExitUsage, text.str()};
}

}  // namespace

Command read_command_line(int argc, const char* const* argv) {
  CLI::App app("Designs broadband impedance-matching networks, as a service or once.",
               "bandwrightd");
  app.set_version_flag("--version", "bandwrightd " BANDWRIGHT_VERSION);
  app.require_subcommand(1);

  ServeCommand serve;
  CLI::App* serve_command = app.add_subcommand("serve", "Serve the REST API");
  serve_command->add_option("--config", serve.sources.file_name,
                            "File of 'key = value' lines; keys are the flags without the dashes");
  add_table_options(*serve_command, serve.sources.flags);

  SolveCommand solve;
  CLI::App* solve_command =
      app.add_subcommand("solve", "Run one request and print its result on standard output");
  solve_command->add_option("FILE", solve.file, "The request as JSON; - is standard input")
      ->required();
  solve_command->add_option("--threads", solve.threads, "Solver threads; 0 is one a core")
      ->check(CLI::Range(0, kMostThreads));

  try {
    app.parse(argc, argv);
  } catch (const CLI::ParseError& outcome) {
    return answer(app, outcome);
  }
  if (solve_command->parsed()) return solve;
  serve.sources.environment = whole_environment();
  if (!serve.sources.file_name.empty()) {
    serve.sources.file_text = read_text_file(serve.sources.file_name);
  }
  return serve;
}

}  // namespace bandwright
