#include "server/app/solve.h"

#include <iostream>
#include <stdexcept>

#include "server/api/api.h"
#include "server/app/core_count.h"
#include "server/app/read_text.h"

namespace bandwright {
namespace {
constexpr int kExitBadRequest = 65;
}  // namespace

int solve(const std::string& file, int threads) {
  const SolveOnce once = solve_once(read_text_file(file), threads_or_cores(threads));
  (once.accepted ? std::cout : std::cerr) << once.text << '\n' << std::flush;
  if (!once.accepted) return kExitBadRequest;
  if (!std::cout) throw std::runtime_error("cannot write the result");
  return 0;
}

}  // namespace bandwright
