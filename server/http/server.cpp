#include "server/http/server.h"

#include <spdlog/logger.h>

#include <boost/asio/executor_work_guard.hpp>
#include <boost/asio/io_context.hpp>
#include <exception>
#include <thread>
#include <utility>
#include <vector>

#include "server/http/listener.h"
#include "server/http/log_line.h"
#include "server/http/session.h"
#include "server/http/session_context.h"

namespace bandwright {
namespace asio = boost::asio;

// Declared in the order of dependence: sessions live in `io` and use `context`.
struct Server::State {
  State(Handler& handler, const ServerOptions& options, std::shared_ptr<spdlog::logger> logger)
      : context(handler, options, std::move(logger)),
        work(io.get_executor()),
        listener(std::make_shared<Listener>(io, context)) {}

  void run_io();
  bool end_sessions(std::chrono::milliseconds grace);

  SessionContext context;
  asio::io_context io;
  asio::executor_work_guard<asio::io_context::executor_type> work;
  std::shared_ptr<Listener> listener;
  std::vector<std::thread> threads;
  bool ended = false;
};

// What escapes a session must not take the other sessions of the thread with it.
void Server::State::run_io() {
  for (;;) {
    try {
      io.run();
      return;
    } catch (const std::exception& e) {
      context.logger->error(LogLine("input or output failed").add("detail", e.what()).text());
    }
  }
}

bool Server::State::end_sessions(std::chrono::milliseconds grace) {
  using Clock = std::chrono::steady_clock;
  constexpr std::chrono::seconds time_to_close{1};
  context.draining = true;
  context.sessions.for_each([](Session& session) { session.drain(); });
  if (context.sessions.wait_until_none(Clock::now() + grace)) return true;
  context.sessions.for_each([](Session& session) { session.close(); });
  return context.sessions.wait_until_none(Clock::now() + time_to_close);
}

Server::Server(Handler& handler, ServerOptions options, std::shared_ptr<spdlog::logger> logger)
    : state_(std::make_unique<State>(handler, options, std::move(logger))) {}

Server::~Server() {
  shutdown(std::chrono::milliseconds(0));
}

std::optional<std::string> Server::start() {
  const ServerOptions& options = state_->context.options;
  if (auto failure = state_->listener->open(options.address, options.port)) return failure;
  state_->listener->start();
  for (int i = 0; i < options.io_threads; ++i) {
    state_->threads.emplace_back([state = state_.get()] { state->run_io(); });
  }
  return std::nullopt;
}

std::uint16_t Server::port() const {
  return state_->listener->port();
}

void Server::stop_accepting() {
  state_->listener->stop();
}

void Server::shutdown(std::chrono::milliseconds grace) {
  if (std::exchange(state_->ended, true)) return;
  stop_accepting();
  if (!state_->threads.empty() && !state_->end_sessions(grace)) {
    state_->context.logger->warn(LogLine("connections were cut off").text());
  }
  state_->context.workers.stop();
  state_->context.workers.join();
  state_->context.gate->shut();
  state_->work.reset();
  state_->io.stop();
  for (std::thread& thread : state_->threads) thread.join();
}

}  // namespace bandwright
