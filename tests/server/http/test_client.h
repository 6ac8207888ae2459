// A blocking client for tests: raw bytes out, one response in.
//
// Reads give up after ten seconds, so that a server that never answers fails a test instead of
// hanging it. Thread safety: one thread a client.
#pragma once

#include <arpa/inet.h>
#include <netinet/in.h>
#include <sys/socket.h>
#include <sys/time.h>
#include <unistd.h>

#include <cerrno>
#include <cstdint>
#include <cstdlib>
#include <optional>
#include <stdexcept>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

namespace bandwright {

struct TestResponse {
  int status = 0;
  std::string head;                                          // status line and fields, as received
  std::vector<std::pair<std::string, std::string>> headers;  // names in lower case
  std::string body;

  std::optional<std::string> header(std::string_view lower_case_name) const {
    for (const auto& [name, value] : headers) {
      if (name == lower_case_name) return value;
    }
    return std::nullopt;
  }
};

class TestClient {
 public:
  explicit TestClient(std::uint16_t port) : socket_(::socket(AF_INET, SOCK_STREAM, 0)) {
    if (socket_ < 0) throw std::runtime_error("no socket");
    const timeval patience{10, 0};
    ::setsockopt(socket_, SOL_SOCKET, SO_RCVTIMEO, &patience, sizeof patience);
    ::setsockopt(socket_, SOL_SOCKET, SO_SNDTIMEO, &patience, sizeof patience);
    sockaddr_in address{};
    address.sin_family = AF_INET;
    address.sin_port = htons(port);
    address.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
    if (::connect(socket_, reinterpret_cast<const sockaddr*>(&address), sizeof address) != 0) {
      ::close(socket_);
      throw std::runtime_error("cannot connect");
    }
  }
  ~TestClient() { close(); }
  TestClient(TestClient&& other) noexcept
      : socket_(std::exchange(other.socket_, -1)), input_(std::move(other.input_)) {}
  TestClient(const TestClient&) = delete;
  TestClient& operator=(const TestClient&) = delete;
  TestClient& operator=(TestClient&&) = delete;

  // Returns false once the server has closed the connection.
  bool send(std::string_view bytes) {
    while (!bytes.empty()) {
      const ssize_t sent = ::send(socket_, bytes.data(), bytes.size(), MSG_NOSIGNAL);
      if (sent <= 0) return false;
      bytes.remove_prefix(static_cast<std::size_t>(sent));
    }
    return true;
  }
  void end_sending() { ::shutdown(socket_, SHUT_WR); }
  void close() {
    if (socket_ >= 0) ::close(std::exchange(socket_, -1));
  }
  // Closes with a reset instead of a farewell.
  void abort() {
    const linger at_once{1, 0};
    ::setsockopt(socket_, SOL_SOCKET, SO_LINGER, &at_once, sizeof at_once);
    close();
  }

  // The next response, an interim one (1xx) too. Nothing when the connection ends first.
  // `bodiless`: the answer to a HEAD request.
  std::optional<TestResponse> read_response(bool bodiless = false) {
    std::size_t end = 0;
    while ((end = input_.find("\r\n\r\n")) == std::string::npos) {
      if (!receive()) return std::nullopt;
    }
    TestResponse response;
    response.head = input_.substr(0, end + 2);
    input_.erase(0, end + 4);
    response.status = std::atoi(response.head.substr(9, 3).c_str());
    read_fields(response);
    const std::string length = response.header("content-length").value_or("0");
    const std::size_t size = bodiless ? 0 : std::strtoull(length.c_str(), nullptr, 10);
    while (input_.size() < size) {
      if (!receive()) return std::nullopt;
    }
    response.body = input_.substr(0, size);
    input_.erase(0, size);
    return response;
  }
  // Whether the server ends the connection without sending anything more.
  bool at_end() { return input_.empty() && !receive(); }

 private:
  bool receive() {
    char chunk[8192];
    const ssize_t count = ::recv(socket_, chunk, sizeof chunk, 0);
    if (count < 0 && (errno == EAGAIN || errno == EWOULDBLOCK)) {
      throw std::runtime_error("the server neither answers nor closes");
    }
    if (count <= 0) return false;
    input_.append(chunk, static_cast<std::size_t>(count));
    return true;
  }

  static void read_fields(TestResponse& response) {
    std::size_t begin = response.head.find("\r\n") + 2;
    while (begin < response.head.size()) {
      const std::size_t end = response.head.find("\r\n", begin);
      const std::string line = response.head.substr(begin, end - begin);
      const std::size_t colon = line.find(": ");
      std::string name = line.substr(0, colon);
      for (char& c : name) c = static_cast<char>(c >= 'A' && c <= 'Z' ? c + 32 : c);
      response.headers.emplace_back(name, line.substr(colon + 2));
      begin = end + 2;
    }
  }

  int socket_;
  std::string input_;
};

// One request on a connection of its own.
inline std::optional<TestResponse> ask(std::uint16_t port, std::string_view request) {
  TestClient client(port);
  client.send(request);
  return client.read_response();
}

}  // namespace bandwright
