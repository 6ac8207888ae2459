#include "server/jobs/done_watch.h"

#include <algorithm>

namespace bandwright {

DoneWatch::DoneWatch(LookUp look_up, Chore chore)
    : look_up_(std::move(look_up)), chore_(std::move(chore)), thread_([this] { work(); }) {}

DoneWatch::~DoneWatch() {
  {
    auto waiting = waiting_.lock();
    waiting->closed = waiting->quit = waiting->changed = true;
  }
  wake_.notify_one();
  thread_.join();
}

void DoneWatch::add(Key key, Clock::time_point deadline, Callback callback) {
  {
    auto waiting = waiting_.lock();
    waiting->waiters.emplace(std::move(key), Waiter{deadline, std::move(callback)});
    waiting->changed = true;
  }
  wake_.notify_one();
}

void DoneWatch::ended(const Key& key) {
  {
    auto waiting = waiting_.lock();
    const auto [first, last] = waiting->waiters.equal_range(key);
    if (first == last) return;
    for (auto waiter = first; waiter != last; ++waiter) {
      waiter->second.deadline = Clock::time_point::min();
    }
    waiting->changed = true;
  }
  wake_.notify_one();
}

void DoneWatch::close() {
  {
    auto waiting = waiting_.lock();
    waiting->closed = waiting->changed = true;
  }
  wake_.notify_one();
}

std::vector<std::pair<DoneWatch::Key, DoneWatch::Callback>> DoneWatch::take_due(Waiting& waiting) {
  std::vector<std::pair<Key, Callback>> due;
  const Clock::time_point now = Clock::now();
  for (auto at = waiting.waiters.begin(); at != waiting.waiters.end();) {
    if (waiting.closed || at->second.deadline <= now) {
      due.emplace_back(at->first, std::move(at->second.callback));
      at = waiting.waiters.erase(at);
    } else {
      ++at;
    }
  }
  return due;
}

DoneWatch::Clock::time_point DoneWatch::first_deadline(const Waiting& waiting) {
  Clock::time_point first = Clock::time_point::max();
  for (const auto& [key, waiter] : waiting.waiters) first = std::min(first, waiter.deadline);
  return first;
}

void DoneWatch::work() {
  Clock::time_point next_chore = Clock::now();
  for (;;) {
    std::vector<std::pair<Key, Callback>> due;
    bool quit = false;
    {
      auto waiting = waiting_.lock();
      const auto wake_at = std::min(next_chore, first_deadline(*waiting));
      wake_.wait_until(waiting.lock(), wake_at, [&] { return waiting->changed; });
      waiting->changed = false;
      due = take_due(*waiting);
      quit = waiting->quit;
    }
    for (auto& [key, callback] : due) {
      try {
        callback(look_up_(key));
      } catch (...) {
        // Whoever waited has failed; that is no reason to fail the others.
      }
    }
    if (quit) return;
    if (Clock::now() >= next_chore) next_chore = Clock::now() + chore_();
  }
}

}  // namespace bandwright
