#include "server/http/listener.h"

#include <fcntl.h>
#include <spdlog/logger.h>
#include <unistd.h>

#include <boost/asio/dispatch.hpp>
#include <boost/asio/strand.hpp>
#include <exception>
#include <utility>

#include "server/http/log_line.h"
#include "server/http/session.h"

namespace bandwright {
namespace asio = boost::asio;
using asio::ip::tcp;
using boost::system::error_code;

namespace {

constexpr std::chrono::milliseconds kRest{50};

int open_reserve() {
  return ::open("/dev/null", O_RDONLY | O_CLOEXEC);
}

// One peer whether it arrives as IPv4 or as IPv4 in IPv6.
std::string peer_name(const tcp::socket& socket) {
  error_code error;
  const tcp::endpoint endpoint = socket.remote_endpoint(error);
  if (error) return "unknown";
  const asio::ip::address address = endpoint.address();
  if (address.is_v6() && address.to_v6().is_v4_mapped()) {
    return asio::ip::make_address_v4(asio::ip::v4_mapped, address.to_v6()).to_string();
  }
  return address.to_string();
}

}  // namespace

Listener::Listener(asio::io_context& io, SessionContext& context)
    : io_(io),
      context_(context),
      acceptor_(asio::make_strand(io)),
      pause_(acceptor_.get_executor()),
      reserve_(open_reserve()) {}

Listener::~Listener() {
  if (reserve_ >= 0) ::close(reserve_);
}

std::optional<std::string> Listener::open(const std::string& address, std::uint16_t port) {
  error_code error;
  const asio::ip::address ip = asio::ip::make_address(address, error);
  if (error) return address + " is not an IP address";
  const tcp::endpoint endpoint(ip, port);
  acceptor_.open(endpoint.protocol(), error);
  if (!error) acceptor_.set_option(asio::socket_base::reuse_address(true), error);
  if (!error) acceptor_.bind(endpoint, error);
  if (!error) acceptor_.listen(asio::socket_base::max_listen_connections, error);
  if (!error) acceptor_.non_blocking(true, error);
  if (error) {
    return "cannot listen on " + address + " port " + std::to_string(port) + ": " + error.message();
  }
  port_ = acceptor_.local_endpoint().port();
  return std::nullopt;
}

void Listener::start() {
  asio::dispatch(acceptor_.get_executor(), [self = shared_from_this()] { self->accept_next(); });
}

void Listener::stop() {
  asio::dispatch(acceptor_.get_executor(), [self = shared_from_this()] {
    error_code ignored;
    self->acceptor_.close(ignored);
    self->pause_.cancel();
  });
}

void Listener::accept_next() {
  if (!acceptor_.is_open()) return;
  acceptor_.async_accept(asio::make_strand(io_),
                         [self = shared_from_this()](error_code error, tcp::socket socket) {
                           self->on_accept(error, std::move(socket));
                         });
}

void Listener::on_accept(const error_code& error, tcp::socket socket) {
  if (!acceptor_.is_open()) return;
  if (!error) {
    begin_session(std::move(socket));
    return accept_next();
  }
  // The client was faster at leaving.
  if (error == asio::error::connection_aborted) return accept_next();
  context_.logger->warn(LogLine("accept failed").add("detail", error.message()).text());
  if (error == asio::error::no_descriptors || error.value() == ENFILE) drop_one_with_reserve();
  rest();
}

// Whatever one connection runs into, the loop goes on.
void Listener::begin_session(tcp::socket socket) {
  try {
    const std::string peer = peer_name(socket);
    const PeerLimits::Admission admission = context_.peers.admit(peer);
    if (admission == PeerLimits::Admission::dropped) return;
    std::make_shared<Session>(std::move(socket), context_, peer, admission)->start();
  } catch (const std::exception& e) {
    context_.logger->error(LogLine("connection failed").add("detail", e.what()).text());
  }
}

void Listener::drop_one_with_reserve() {
  if (reserve_ >= 0) ::close(reserve_);
  error_code ignored;
  tcp::socket dropped(io_);
  acceptor_.accept(dropped, ignored);
  dropped.close(ignored);
  reserve_ = open_reserve();
}

void Listener::rest() {
  pause_.expires_after(kRest);
  pause_.async_wait([self = shared_from_this()](error_code) { self->accept_next(); });
}

}  // namespace bandwright
