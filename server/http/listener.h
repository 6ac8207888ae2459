// The accept loop. It never ends by itself and never spins.
//
// Out of descriptors, accept fails at once and the waiting connection stays in the backlog, so a
// plain loop would burn a core. One descriptor is held in reserve: it is given up to accept and
// drop that connection, then taken again, and the loop rests before the next try.
//
// Thread safety: open before the I/O threads run; stop from any thread.
#pragma once

#include <boost/asio/io_context.hpp>
#include <boost/asio/ip/tcp.hpp>
#include <boost/asio/steady_timer.hpp>
#include <cstdint>
#include <memory>
#include <optional>
#include <string>

#include "server/http/session_context.h"

namespace bandwright {

class Listener : public std::enable_shared_from_this<Listener> {
 public:
  Listener(boost::asio::io_context& io, SessionContext& context);
  ~Listener();

  // Binds and listens; returns why it could not.
  std::optional<std::string> open(const std::string& address, std::uint16_t port);
  std::uint16_t port() const { return port_; }
  void start();
  void stop();

 private:
  void accept_next();
  void on_accept(const boost::system::error_code& error, boost::asio::ip::tcp::socket socket);
  void begin_session(boost::asio::ip::tcp::socket socket);
  void drop_one_with_reserve();
  void rest();

  boost::asio::io_context& io_;
  SessionContext& context_;
  boost::asio::ip::tcp::acceptor acceptor_;
  boost::asio::steady_timer pause_;
  std::uint16_t port_ = 0;
  int reserve_ = -1;
};

}  // namespace bandwright
