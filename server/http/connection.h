// The bytes of one connection under absolute deadlines and bounded buffers.
//
// Knows where a head and a body end, not what they say. Every operation runs until its deadline;
// a byte that arrives does not extend it.
//
// Thread safety: used on its strand only, apart from the constructor.
#pragma once

#include <array>
#include <boost/asio/awaitable.hpp>
#include <boost/asio/ip/tcp.hpp>
#include <boost/asio/steady_timer.hpp>
#include <chrono>
#include <cstddef>
#include <cstdint>
#include <memory>
#include <string>
#include <string_view>

#include "server/http/head_validator.h"

namespace bandwright {

class Connection : public std::enable_shared_from_this<Connection> {
 public:
  using Clock = std::chrono::steady_clock;
  enum class Outcome { complete, closed, timed_out, idle, too_large, malformed };

  // `socket` runs on a strand of its own.
  explicit Connection(boost::asio::ip::tcp::socket socket);

  // Waits for the first byte of a head until `idle`, for its end `head_time` longer.
  // When complete, head() is the head, and the bytes behind it wait for what is read next.
  boost::asio::awaitable<Outcome> read_head(const HeadLimits& limits, Clock::time_point idle,
                                            Clock::duration head_time);
  // When read_head found it too large: whether it was the request line already.
  bool request_line_ended() const;
  std::string_view head() const { return head_; }

  boost::asio::awaitable<Outcome> read_body(std::uint64_t length, Clock::time_point deadline,
                                            std::string& body);
  // Whether bytes wait that were read together with the last head or body.
  bool has_input() const { return !input_.empty(); }

  boost::asio::awaitable<Outcome> write(std::string_view first, std::string_view second,
                                        Clock::time_point deadline);
  // Ends our side and swallows what the client still sends, for a moment and up to a limit: closed
  // at once, unread bytes would make the kernel reset the connection and lose the response.
  boost::asio::awaitable<void> linger();

  // Waits for `wake`, but for a client that has closed its side only `half_closed_wait` longer.
  // Complete means woken.
  boost::asio::awaitable<Outcome> wait(Clock::duration half_closed_wait);
  void wake() { wake_.cancel(); }

  void close();

 private:
  boost::asio::awaitable<Outcome> read_some(std::size_t at_most);
  void set_deadline(Clock::time_point deadline);
  void clear_deadline();
  void on_timer();
  void watch_client(Clock::duration half_closed_wait);

  boost::asio::ip::tcp::socket socket_;
  boost::asio::steady_timer timer_;
  boost::asio::steady_timer wake_;
  Clock::time_point deadline_ = Clock::time_point::max();
  bool expired_ = false;
  bool waiting_ = false;
  std::string head_;
  std::string input_;  // at most a head and one chunk
  std::array<char, 16 * 1024> chunk_;
};

}  // namespace bandwright
