// A server for tests whose handler says what it was asked.
#pragma once

#include <doctest/doctest.h>
#include <spdlog/logger.h>
#include <spdlog/sinks/ostream_sink.h>

#include <atomic>
#include <chrono>
#include <functional>
#include <memory>
#include <mutex>
#include <sstream>
#include <stdexcept>
#include <string>
#include <thread>
#include <utility>
#include <vector>

#include "server/http/server.h"
#include "tests/server/http/test_client.h"

namespace bandwright {

// Answers "METHOD path\nbody". Paths with a meaning: /refuse is answered from the head, /throw and
// /throw-head throw, /lose forgets the request, /late answers when release() is called, /twice
// answers twice, /status-204, /evil sets headers that belong to the transport or break it.
class EchoHandler : public Handler {
 public:
  std::uint64_t max_body = 1000;

  HeadDecision on_head(const RequestHead& head) override {
    if (head.path == "/refuse") return Response{401, {}, "refused", false};
    if (head.path == "/throw-head") throw std::runtime_error("head");
    return AcceptBody{max_body};
  }

  void on_request(Request request, Respond respond) override {
    ++requests;
    const std::string& path = request.head.path;
    if (path == "/throw") throw std::runtime_error("thrown on purpose");
    if (path == "/throw-int") throw 7;
    if (path == "/lose") return;
    if (path == "/status-204") return respond(Response{204, {}, "", false});
    if (path == "/status-42") return respond(Response{42, {}, "", false});
    if (path == "/evil") {
      return respond(Response{200,
                              {{"X-Split", "a\r\nSet-Cookie: b"},
                               {"Content-Length", "1"},
                               {"X Space", "c"},
                               {"X-Fine", "d"}},
                              "body",
                              false});
    }
    if (path == "/late") {
      const std::lock_guard lock(mutex_);
      late_.push_back(std::move(respond));
      return;
    }
    std::string body = request.head.method + " " + path + "\n" + request.body;
    respond(Response{200, {{"Content-Type", "text/plain"}}, body, false});
    if (path == "/twice") respond(Response{500, {}, "second", false});
  }

  Response on_fault(int status, std::string_view detail, std::string_view request_id) override {
    return Response{status, {}, std::string(detail) + " " + std::string(request_id), false};
  }

  void release() {
    const std::lock_guard lock(mutex_);
    for (const Respond& respond : late_) respond(Response{200, {}, "late", false});
    late_.clear();
  }
  std::size_t waiting() {
    const std::lock_guard lock(mutex_);
    return late_.size();
  }

  std::atomic<int> requests{0};

 private:
  std::mutex mutex_;
  std::vector<Respond> late_;
};

// Polls `condition` for up to ten seconds.
inline bool eventually(const std::function<bool()>& condition) {
  for (int i = 0; i < 2000; ++i) {
    if (condition()) return true;
    std::this_thread::sleep_for(std::chrono::milliseconds(5));
  }
  return false;
}

class EchoServer {
 public:
  explicit EchoServer(ServerOptions options = {})
      : logger_(std::make_shared<spdlog::logger>(
            "test", std::make_shared<spdlog::sinks::ostream_sink_mt>(log_))),
        server_(handler, std::move(options), logger_) {
    logger_->set_pattern("{%v}");
    const std::optional<std::string> failure = server_.start();
    REQUIRE_MESSAGE(!failure, failure.value_or(""));
  }

  std::uint16_t port() const { return server_.port(); }
  Server& server() { return server_; }
  // Complete after shutdown.
  std::string log() const { return log_.str(); }
  bool answers() {
    const auto response = ask(port(), "GET /ping HTTP/1.1\r\nHost: localhost\r\n\r\n");
    return response && response->status == 200 && response->body == "GET /ping\n";
  }

  EchoHandler handler;

 private:
  std::ostringstream log_;
  std::shared_ptr<spdlog::logger> logger_;
  Server server_;
};

}  // namespace bandwright
