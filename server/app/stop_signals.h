// SIGTERM and SIGINT as something a thread waits for, instead of a handler that may do nothing.
#pragma once

#include <chrono>
#include <csignal>
#include <optional>

namespace bandwright {

// Make it before the first thread: threads inherit that these signals are not theirs.
class StopSignals {
 public:
  StopSignals();

  int wait() const;
  std::optional<int> wait_for(std::chrono::milliseconds time) const;

 private:
  sigset_t set_{};
};

}  // namespace bandwright
