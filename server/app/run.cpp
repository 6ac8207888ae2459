#include "server/app/run.h"

#include <exception>
#include <iostream>

#include "server/app/command_line.h"
#include "server/app/serve.h"
#include "server/app/solve.h"

namespace bandwright {
namespace {

constexpr int kExitFailure = 1;
constexpr int kExitConfiguration = 78;

int run_serve(const ServeCommand& command) {
  const auto loaded = load_config(command.sources);
  if (loaded) return serve(*loaded);
  for (const std::string& error : loaded.error()) std::cerr << "bandwrightd: " << error << '\n';
  return kExitConfiguration;
}

int run_command(const Command& command) {
  if (const auto* serve_command = std::get_if<ServeCommand>(&command)) {
    return run_serve(*serve_command);
  }
  if (const auto* solve_command = std::get_if<SolveCommand>(&command)) {
    return solve(solve_command->file, solve_command->threads);
  }
  const auto& answer = std::get<Answered>(command);
  (answer.exit_status == 0 ? std::cout : std::cerr) << answer.text;
  return answer.exit_status;
}

}  // namespace

int run(int argc, const char* const* argv) {
  try {
    return run_command(read_command_line(argc, argv));
  } catch (const std::exception& e) {
    std::cerr << "bandwrightd: " << e.what() << '\n';
    return kExitFailure;
  }
}

}  // namespace bandwright
