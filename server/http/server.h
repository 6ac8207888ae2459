// The HTTP/1.1 server: sockets, deadlines and limits around a Handler.
//
// A few I/O threads move bytes, one strand a connection; handlers run on worker threads, one
// request of a connection at a time, so at most `connections` requests wait for a worker. A HEAD
// request reaches the handler as GET and its body stays here. Bodies are framed by Content-Length
// alone: any transfer coding is 411 (see head_validator.h for what else is refused).
//
// Thread safety: start and shutdown from one thread; port from any, after start.
#pragma once

#include <chrono>
#include <cstdint>
#include <memory>
#include <optional>
#include <string>

#include "server/http/head_validator.h"
#include "server/message/http.h"

namespace spdlog {
class logger;
}

namespace bandwright {

struct ServerOptions {
  std::string address = "127.0.0.1";
  std::uint16_t port = 0;  // 0: any free port
  int io_threads = 2;
  int worker_threads = 4;
  HeadLimits head;
  // Absolute: bytes that drip in do not extend them.
  std::chrono::milliseconds head_deadline{10'000};   // from a request's first byte: 408
  std::chrono::milliseconds body_deadline{30'000};   // from the end of the head: 408
  std::chrono::milliseconds write_deadline{30'000};  // from a response's first byte
  std::chrono::milliseconds idle_deadline{15'000};   // between requests
  // A client that closes its sending side while its answer is pending may only read it, or may be
  // gone: it keeps its place this long.
  std::chrono::milliseconds half_closed_wait{2'000};
  int requests_per_connection = 1000;
  int connections = 256;  // 503 beyond
  int connections_a_peer = 64;
};

class Server {
 public:
  // `handler` outlives the server.
  Server(Handler& handler, ServerOptions options, std::shared_ptr<spdlog::logger> logger);
  ~Server();
  Server(const Server&) = delete;
  Server& operator=(const Server&) = delete;

  // Listens and serves. Returns why it could not.
  std::optional<std::string> start();
  std::uint16_t port() const;

  // Closes the listening socket; connections go on.
  void stop_accepting();
  // Requests in progress get `grace` to be answered; idle connections close at once. Returns when
  // every thread has ended, which takes as long as the slowest on_request that has begun.
  void shutdown(std::chrono::milliseconds grace);

 private:
  struct State;
  std::unique_ptr<State> state_;
};

}  // namespace bandwright
