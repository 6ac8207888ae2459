#include "server/http/connection.h"

#include <sys/socket.h>

#include <algorithm>
#include <boost/asio/buffer.hpp>
#include <boost/asio/redirect_error.hpp>
#include <boost/asio/use_awaitable.hpp>
#include <boost/asio/write.hpp>
#include <utility>

namespace bandwright {
namespace asio = boost::asio;
using boost::system::error_code;

namespace {
constexpr std::chrono::seconds kLingerTime{2};
constexpr std::size_t kLingerBytes = 4u << 20;
}  // namespace

Connection::Connection(asio::ip::tcp::socket socket)
    : socket_(std::move(socket)),
      timer_(socket_.get_executor()),
      wake_(socket_.get_executor(), Clock::time_point::max()) {
  error_code ignored;
  socket_.set_option(asio::ip::tcp::no_delay(true), ignored);
}

void Connection::set_deadline(Clock::time_point deadline) {
  expired_ = false;
  deadline_ = deadline;
  timer_.expires_at(deadline);
  timer_.async_wait([self = shared_from_this()](error_code error) {
    if (!error) self->on_timer();
  });
}

void Connection::clear_deadline() {
  deadline_ = Clock::time_point::max();
  timer_.cancel();
}

// A timer that fired may still be queued while its deadline was moved: the clock decides.
void Connection::on_timer() {
  if (Clock::now() < deadline_) return;
  expired_ = true;
  error_code ignored;
  socket_.cancel(ignored);
  wake_.cancel();
}

void Connection::close() {
  clear_deadline();
  wake_.cancel();
  error_code ignored;
  socket_.close(ignored);
}

asio::awaitable<Connection::Outcome> Connection::read_some(std::size_t at_most) {
  if (expired_) co_return Outcome::timed_out;
  const std::size_t size = std::min(at_most, chunk_.size());
  error_code error;
  const std::size_t count = co_await socket_.async_read_some(
      asio::buffer(chunk_.data(), size), asio::redirect_error(asio::use_awaitable, error));
  if (expired_) co_return Outcome::timed_out;
  if (error) co_return Outcome::closed;
  input_.append(chunk_.data(), count);
  co_return Outcome::complete;
}

asio::awaitable<Connection::Outcome> Connection::read_head(const HeadLimits& limits,
                                                           Clock::time_point idle,
                                                           Clock::duration head_time) {
  head_.clear();
  set_deadline(input_.empty() ? idle : Clock::now() + head_time);
  std::size_t checked = 0;
  for (;;) {
    const HeadSpan span = find_head(input_, checked);
    checked = input_.size();
    if (span.state == HeadSpan::State::malformed) co_return Outcome::malformed;
    const bool complete = span.state == HeadSpan::State::complete;
    const std::size_t length = (complete ? span.end : input_.size()) - span.begin;
    if (length > limits.head_bytes) co_return Outcome::too_large;
    if (complete) {
      head_ = input_.substr(span.begin, length);
      input_.erase(0, span.end);
      clear_deadline();
      co_return Outcome::complete;
    }
    const bool first = input_.empty();
    const Outcome read = co_await read_some(chunk_.size());
    if (read == Outcome::timed_out && first) co_return Outcome::idle;
    if (read != Outcome::complete) co_return read;
    if (first) set_deadline(Clock::now() + head_time);
  }
}

bool Connection::request_line_ended() const {
  return input_.find('\n', 2) != std::string::npos;
}

asio::awaitable<Connection::Outcome> Connection::read_body(std::uint64_t length,
                                                           Clock::time_point deadline,
                                                           std::string& body) {
  set_deadline(deadline);
  for (;;) {
    const std::size_t missing = static_cast<std::size_t>(length - body.size());
    const std::size_t taken = std::min(missing, input_.size());
    body.append(input_, 0, taken);
    input_.erase(0, taken);
    if (body.size() == length) break;
    const Outcome read = co_await read_some(static_cast<std::size_t>(length - body.size()));
    if (read != Outcome::complete) co_return read;
  }
  clear_deadline();
  co_return Outcome::complete;
}

asio::awaitable<Connection::Outcome> Connection::write(std::string_view first,
                                                       std::string_view second,
                                                       Clock::time_point deadline) {
  set_deadline(deadline);
  const std::array<asio::const_buffer, 2> buffers = {asio::buffer(first.data(), first.size()),
                                                     asio::buffer(second.data(), second.size())};
  error_code error;
  co_await asio::async_write(socket_, buffers, asio::redirect_error(asio::use_awaitable, error));
  if (expired_) co_return Outcome::timed_out;
  clear_deadline();
  co_return error ? Outcome::closed : Outcome::complete;
}

asio::awaitable<void> Connection::linger() {
  error_code error;
  socket_.shutdown(asio::ip::tcp::socket::shutdown_send, error);
  if (error) co_return;
  set_deadline(Clock::now() + kLingerTime);
  for (std::size_t swallowed = 0; swallowed < kLingerBytes; swallowed += input_.size()) {
    input_.clear();
    if (co_await read_some(chunk_.size()) != Outcome::complete) break;
  }
}

// Bytes that arrive (a pipelined request) end the watch: the answer's own limits bound the wait.
void Connection::watch_client(Clock::duration half_closed_wait) {
  socket_.async_wait(asio::ip::tcp::socket::wait_read, [self = shared_from_this(),
                                                        half_closed_wait](error_code error) {
    if (error || !self->waiting_) return;
    char byte = 0;
    const ssize_t seen = ::recv(self->socket_.native_handle(), &byte, 1, MSG_PEEK | MSG_DONTWAIT);
    if (seen == 0) self->set_deadline(Clock::now() + half_closed_wait);
    if (seen < 0 && errno != EAGAIN && errno != EINTR) self->set_deadline(Clock::now());
  });
}

asio::awaitable<Connection::Outcome> Connection::wait(Clock::duration half_closed_wait) {
  if (!socket_.is_open()) co_return Outcome::closed;
  expired_ = false;
  waiting_ = true;
  watch_client(half_closed_wait);
  error_code woken;
  co_await wake_.async_wait(asio::redirect_error(asio::use_awaitable, woken));
  waiting_ = false;
  clear_deadline();
  error_code ignored;
  socket_.cancel(ignored);
  if (!socket_.is_open()) co_return Outcome::closed;
  co_return expired_ ? Outcome::timed_out : Outcome::complete;
}

}  // namespace bandwright
