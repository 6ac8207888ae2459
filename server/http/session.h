// One connection from accept to close: requests in, one response each, in order.
//
// The loop reads as the protocol: head, check, decision on the head, body, handler, response. A
// fault of the transport is answered through Handler::on_fault and ends the connection, because
// after it nobody can say where the next request begins.
//
// Thread safety: start, refuse and drain from any thread; the rest runs on the session's strand.
#pragma once

#include <boost/asio/any_io_executor.hpp>
#include <boost/asio/awaitable.hpp>
#include <boost/asio/ip/tcp.hpp>
#include <memory>
#include <optional>
#include <string>

#include "server/http/connection.h"
#include "server/http/peer_limits.h"
#include "server/http/session_context.h"
#include "server/message/http.h"

namespace bandwright {

class Session : public std::enable_shared_from_this<Session> {
 public:
  // `admission` was given for `peer` and is given back when the session ends.
  Session(boost::asio::ip::tcp::socket socket, SessionContext& context, std::string peer,
          PeerLimits::Admission admission);
  ~Session();

  // Serves requests, or, for a refused connection, answers 503.
  void start();
  // Closes at once if idle, else after the response in progress.
  void drain();
  void close();

 private:
  // What the worker side left: a response, or nothing when the handler lost the request.
  struct Delivery {
    std::optional<Response> response;
  };
  class Responder;
  struct Exchange;

  boost::asio::awaitable<void> serve();
  boost::asio::awaitable<void> answer_refused();
  // Each returns whether the connection can carry another request.
  boost::asio::awaitable<bool> exchange(int number);
  boost::asio::awaitable<bool> answer(Exchange& exchange);
  boost::asio::awaitable<std::optional<Response>> take_body(Exchange& exchange);
  boost::asio::awaitable<std::optional<Response>> run_handler(Exchange& exchange);
  boost::asio::awaitable<bool> send(Exchange& exchange, Response response);

  void submit(Request request);
  void deliver(Delivery delivery);
  Response fault(int status, std::string_view detail, const Exchange& exchange);
  void log_access(const Exchange& exchange, int status, std::size_t bytes);

  SessionContext& context_;
  const std::string peer_;
  const PeerLimits::Admission admission_;
  const boost::asio::any_io_executor strand_;
  const std::shared_ptr<Connection> connection_;
  std::optional<Delivery> delivery_;
  bool idle_ = false;
  bool draining_ = false;
};

}  // namespace bandwright
