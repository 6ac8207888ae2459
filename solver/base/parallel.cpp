#include "solver/base/parallel.h"

#include <algorithm>
#include <atomic>
#include <exception>
#include <mutex>
#include <thread>
#include <vector>

namespace bandwright {

void parallel_for(int threads, std::size_t count, const std::function<void(std::size_t)>& turn) {
  if (threads <= 1 || count <= 1) {
    for (std::size_t i = 0; i < count; ++i) turn(i);
    return;
  }
  std::atomic<std::size_t> next{0};
  std::exception_ptr failure;
  std::mutex failure_mutex;
  auto work = [&] {
    try {
      for (std::size_t i = next++; i < count; i = next++) turn(i);
    } catch (...) {
      std::lock_guard lock(failure_mutex);
      if (!failure) failure = std::current_exception();
      next = count;
    }
  };
  {
    std::vector<std::jthread> helpers;
    const std::size_t extra = std::min<std::size_t>(threads, count) - 1;
    for (std::size_t i = 0; i < extra; ++i) helpers.emplace_back(work);
    work();
  }
  if (failure) std::rethrow_exception(failure);
}

}  // namespace bandwright
