// Waits for jobs to end on behalf of many, with one thread.
//
// The same thread does a chore now and then, so that the service needs no other clock.
//
// Thread safety: all members may be called from any thread. Callbacks, the look-up and the chore
// run on the watch's own thread, with no lock held.
// Invariant: a callback is called exactly once, at the latest when the watch is destroyed.
#pragma once

#include <chrono>
#include <condition_variable>
#include <functional>
#include <map>
#include <optional>
#include <string>
#include <thread>
#include <utility>
#include <vector>

#include "server/message/job.h"
#include "server/store/guarded.h"

namespace bandwright {

class DoneWatch {
 public:
  using Clock = std::chrono::steady_clock;
  using Key = std::pair<std::string, std::string>;  // team, id
  using LookUp = std::function<std::optional<JobRecord>(const Key&)>;
  using Callback = std::function<void(std::optional<JobRecord>)>;
  using Chore = std::function<std::chrono::milliseconds()>;  // returns the pause until the next

  DoneWatch(LookUp look_up, Chore chore);
  ~DoneWatch();
  DoneWatch(const DoneWatch&) = delete;
  DoneWatch& operator=(const DoneWatch&) = delete;

  void add(Key key, Clock::time_point deadline, Callback callback);
  // Everyone waiting for this job is called now.
  void ended(const Key& key);
  // Everyone is called now, and whoever is added later at once.
  void close();

 private:
  struct Waiter {
    Clock::time_point deadline;
    Callback callback;
  };
  struct Waiting {
    std::multimap<Key, Waiter> waiters;
    bool closed = false;
    bool quit = false;
    bool changed = false;  // look again before sleeping
  };

  void work();
  static std::vector<std::pair<Key, Callback>> take_due(Waiting& waiting);
  static Clock::time_point first_deadline(const Waiting& waiting);

  LookUp look_up_;
  Chore chore_;
  Guarded<Waiting> waiting_;
  std::condition_variable wake_;
  std::thread thread_;
};

}  // namespace bandwright
