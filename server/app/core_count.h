// What "0 threads" stands for.
#pragma once

#include <algorithm>
#include <cstdint>
#include <thread>

namespace bandwright {

// 0: one a core.
inline int threads_or_cores(std::int64_t threads) {
  if (threads > 0) return static_cast<int>(threads);
  return std::max(1, static_cast<int>(std::thread::hardware_concurrency()));
}

}  // namespace bandwright
