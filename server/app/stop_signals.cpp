#include "server/app/stop_signals.h"

#include <pthread.h>

#include <ctime>

namespace bandwright {

StopSignals::StopSignals() {
  sigemptyset(&set_);
  sigaddset(&set_, SIGTERM);
  sigaddset(&set_, SIGINT);
  pthread_sigmask(SIG_BLOCK, &set_, nullptr);
}

int StopSignals::wait() const {
  int signal = 0;
  while (sigwait(&set_, &signal) != 0) {
  }
  return signal;
}

std::optional<int> StopSignals::wait_for(std::chrono::milliseconds time) const {
  const auto seconds = std::chrono::duration_cast<std::chrono::seconds>(time);
  timespec limit{};
  limit.tv_sec = seconds.count();
  limit.tv_nsec = std::chrono::nanoseconds(time - seconds).count();
  const int signal = sigtimedwait(&set_, nullptr, &limit);
  if (signal < 0) return std::nullopt;
  return signal;
}

}  // namespace bandwright
