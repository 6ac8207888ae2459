// What all sessions of a server share, and the list of those that are open.
//
// Lifetime: outlives the I/O context, which holds the sessions.
#pragma once

#include <atomic>
#include <boost/asio/thread_pool.hpp>
#include <chrono>
#include <condition_variable>
#include <cstdint>
#include <functional>
#include <memory>
#include <mutex>
#include <string>
#include <unordered_map>

#include "server/http/peer_limits.h"
#include "server/http/server.h"
#include "server/message/http.h"

namespace bandwright {

class Session;

// Lets responses in while the server lives. A handler may keep its Respond longer than that: it
// holds the gate, finds it shut and does nothing.
class ResponseGate {
 public:
  void pass(const std::function<void()>& deliver) {
    const std::lock_guard lock(mutex_);
    if (open_) deliver();
  }
  void shut() {
    const std::lock_guard lock(mutex_);
    open_ = false;
  }

 private:
  std::mutex mutex_;
  bool open_ = true;
};

// Ids unique to the process and, by a random part, between processes.
class RequestIds {
 public:
  RequestIds();
  std::string next();

 private:
  const std::uint32_t process_part_;
  std::atomic<std::uint64_t> count_{0};
};

// Thread safety: all members may be called from any thread.
class OpenSessions {
 public:
  void add(const std::shared_ptr<Session>& session);
  void remove(const Session* session);
  // Calls `visit` for each open session, outside the lock.
  void for_each(const std::function<void(Session&)>& visit);
  // Returns whether all had ended by then.
  bool wait_until_none(std::chrono::steady_clock::time_point deadline);

 private:
  std::mutex mutex_;
  std::condition_variable ended_;
  std::unordered_map<const Session*, std::weak_ptr<Session>> sessions_;
};

struct SessionContext {
  SessionContext(Handler& the_handler, const ServerOptions& the_options,
                 std::shared_ptr<spdlog::logger> the_logger);

  Handler& handler;
  const ServerOptions options;
  const std::shared_ptr<spdlog::logger> logger;
  PeerLimits peers;
  OpenSessions sessions;
  RequestIds ids;
  std::atomic<bool> draining{false};
  const std::shared_ptr<ResponseGate> gate = std::make_shared<ResponseGate>();
  boost::asio::thread_pool workers;
};

}  // namespace bandwright
