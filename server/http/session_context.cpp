#include "server/http/session_context.h"

#include <array>
#include <cinttypes>
#include <cstdio>
#include <random>
#include <utility>
#include <vector>

#include "server/http/session.h"

namespace bandwright {
namespace {
constexpr int kRefusedAtOnce = 64;
}  // namespace

RequestIds::RequestIds() : process_part_(std::random_device{}()) {}

std::string RequestIds::next() {
  std::array<char, 40> text{};
  std::snprintf(text.data(), text.size(), "rq_%08" PRIx32 "%08" PRIx64, process_part_, ++count_);
  return text.data();
}

void OpenSessions::add(const std::shared_ptr<Session>& session) {
  const std::lock_guard lock(mutex_);
  sessions_.emplace(session.get(), session);
}

void OpenSessions::remove(const Session* session) {
  const std::lock_guard lock(mutex_);
  sessions_.erase(session);
  if (sessions_.empty()) ended_.notify_all();
}

void OpenSessions::for_each(const std::function<void(Session&)>& visit) {
  std::vector<std::shared_ptr<Session>> open;
  {
    const std::lock_guard lock(mutex_);
    for (const auto& [address, weak] : sessions_) {
      if (auto session = weak.lock()) open.push_back(std::move(session));
    }
  }
  for (const auto& session : open) visit(*session);
}

bool OpenSessions::wait_until_none(std::chrono::steady_clock::time_point deadline) {
  std::unique_lock lock(mutex_);
  return ended_.wait_until(lock, deadline, [this] { return sessions_.empty(); });
}

SessionContext::SessionContext(Handler& the_handler, const ServerOptions& the_options,
                               std::shared_ptr<spdlog::logger> the_logger)
    : handler(the_handler),
      options(the_options),
      logger(std::move(the_logger)),
      peers(the_options.connections, the_options.connections_a_peer, kRefusedAtOnce),
      workers(static_cast<std::size_t>(the_options.worker_threads)) {}

}  // namespace bandwright
