// Slow, vanished and too many clients.
#include <doctest/doctest.h>
#include <fcntl.h>
#include <sys/resource.h>
#include <unistd.h>

#include <string>
#include <utility>
#include <vector>

#include "tests/server/http/echo_server.h"

namespace bandwright {
namespace {

using std::chrono::milliseconds;

const std::string kPing = "GET /ping HTTP/1.1\r\nHost: localhost\r\n\r\n";
const std::string kLate = "GET /late HTTP/1.1\r\nHost: localhost\r\n\r\n";

// Sends `bytes` one by one until the server has had enough.
std::optional<TestResponse> drip(TestClient& client, const std::string& bytes) {
  for (const char c : bytes) {
    if (!client.send(std::string_view(&c, 1))) break;
    std::this_thread::sleep_for(milliseconds(20));
  }
  return client.read_response();
}

TEST_CASE("bytes that drip in do not extend the deadline of a head") {
  ServerOptions options;
  options.head_deadline = milliseconds(200);
  EchoServer echo(options);
  TestClient client(echo.port());
  const auto response = drip(client, "GET / HTTP/1.1\r\nX: " + std::string(200, 'x'));
  REQUIRE(response);
  CHECK(response->status == 408);
  CHECK(client.at_end());
}

TEST_CASE("bytes that drip in do not extend the deadline of a body") {
  ServerOptions options;
  options.body_deadline = milliseconds(200);
  EchoServer echo(options);
  TestClient client(echo.port());
  client.send("POST /a HTTP/1.1\r\nHost: a\r\nContent-Length: 900\r\n\r\n");
  const auto response = drip(client, std::string(200, 'x'));
  REQUIRE(response);
  CHECK(response->status == 408);
  CHECK(echo.handler.requests == 0);
}

TEST_CASE("a connection that asks nothing is closed without a word") {
  ServerOptions options;
  options.idle_deadline = milliseconds(100);
  EchoServer echo(options);
  TestClient fresh(echo.port());
  CHECK(fresh.at_end());
  TestClient used(echo.port());
  used.send(kPing);
  CHECK(used.read_response()->status == 200);
  CHECK(used.at_end());
}

TEST_CASE("a client that does not read its response is let go") {
  ServerOptions options;
  options.write_deadline = milliseconds(100);
  options.connections_a_peer = 1;
  EchoServer echo(options);
  echo.handler.max_body = 32u << 20;
  TestClient client(echo.port());
  const std::string body(16u << 20, 'x');  // more than the kernel buffers
  client.send("POST /a HTTP/1.1\r\nHost: a\r\nContent-Length: " + std::to_string(body.size()) +
              "\r\n\r\n");
  client.send(body);
  REQUIRE(eventually([&] { return echo.handler.requests == 1; }));
  CHECK(eventually([&] { return echo.answers(); }));
  CHECK_FALSE(client.read_response());
}

TEST_CASE("a client that leaves while its answer is pending gives its place back") {
  for (const bool farewell : {true, false}) {
    CAPTURE(farewell);
    ServerOptions options;
    options.connections_a_peer = 1;
    options.half_closed_wait = milliseconds(50);
    EchoServer echo(options);
    TestClient client(echo.port());
    client.send(kLate);
    REQUIRE(eventually([&] { return echo.handler.waiting() == 1; }));
    CHECK_FALSE(echo.answers());
    if (farewell) {
      client.close();
    } else {
      client.abort();
    }
    CHECK(eventually([&] { return echo.answers(); }));
    echo.handler.release();  // to a client long gone
    CHECK(eventually([&] { return echo.answers(); }));
  }
}

TEST_CASE("a client that only ends its sending side still gets its answer") {
  EchoServer echo;
  TestClient client(echo.port());
  client.send(kLate);
  client.end_sending();
  REQUIRE(eventually([&] { return echo.handler.waiting() == 1; }));
  echo.handler.release();
  const auto response = client.read_response();
  REQUIRE(response);
  CHECK(response->body == "late");
}

TEST_CASE("a peer is served at its limit of connections and answered 503 one past it") {
  ServerOptions options;
  options.connections_a_peer = 3;
  EchoServer echo(options);
  std::vector<TestClient> clients;
  for (int i = 0; i < 3; ++i) {
    clients.emplace_back(echo.port());
    clients.back().send(kPing);
    CHECK(clients.back().read_response()->status == 200);
  }
  TestClient refused(echo.port());
  const auto response = refused.read_response();
  REQUIRE(response);
  CHECK(response->status == 503);
  CHECK(response->header("retry-after"));
  CHECK(refused.at_end());

  clients.pop_back();
  CHECK(eventually([&] { return echo.answers(); }));
}

TEST_CASE("hundreds of connections past the limit leave the server well") {
  EchoServer echo;
  std::vector<TestClient> clients;
  for (int i = 0; i < 300; ++i) clients.emplace_back(echo.port());
  clients[0].send(kPing);
  CHECK(clients[0].read_response()->status == 200);
  clients.clear();
  CHECK(eventually([&] { return echo.answers(); }));
}

// Lowers the number of descriptors the process may have, for a scope.
class DescriptorLimit {
 public:
  explicit DescriptorLimit(int most) {
    ::getrlimit(RLIMIT_NOFILE, &before_);
    rlimit low = before_;
    low.rlim_cur = static_cast<rlim_t>(most);
    ::setrlimit(RLIMIT_NOFILE, &low);
  }
  ~DescriptorLimit() { ::setrlimit(RLIMIT_NOFILE, &before_); }
  DescriptorLimit(const DescriptorLimit&) = delete;
  DescriptorLimit& operator=(const DescriptorLimit&) = delete;

 private:
  rlimit before_{};
};

int lowest_free_descriptor() {
  const int probe = ::open("/dev/null", O_RDONLY);
  ::close(probe);
  return probe;
}

TEST_CASE("out of descriptors the server drops a connection and goes on") {
  EchoServer echo;
  REQUIRE(echo.answers());
  // The connection of answers() is gone once the lowest free descriptor stays the same.
  int next = -1;
  REQUIRE(eventually([&] {
    const int before = std::exchange(next, lowest_free_descriptor());
    std::this_thread::sleep_for(milliseconds(20));
    return before == next;
  }));
  {
    // Room for the client's own socket and no more.
    const DescriptorLimit limit(next + 1);
    TestClient client(echo.port());
    client.send(kPing);
    CHECK_FALSE(client.read_response());
  }
  CHECK(eventually([&] { return echo.answers(); }));
}

TEST_CASE("shutting down answers the request in progress and closes idle connections") {
  EchoServer echo;
  TestClient idle(echo.port());
  idle.send(kPing);
  CHECK(idle.read_response()->status == 200);
  TestClient busy(echo.port());
  busy.send(kLate);
  REQUIRE(eventually([&] { return echo.handler.waiting() == 1; }));
  std::thread shutdown([&] { echo.server().shutdown(std::chrono::seconds(10)); });
  CHECK(idle.at_end());
  echo.handler.release();
  const auto response = busy.read_response();
  shutdown.join();
  REQUIRE(response);
  CHECK(response->body == "late");
  CHECK(response->header("connection") == "close");
  CHECK_THROWS(TestClient(echo.port()));
}

TEST_CASE("shutting down does not wait past its grace, and later answers do nothing") {
  EchoHandler handler;
  {
    auto logger = std::make_shared<spdlog::logger>("none");
    Server server(handler, {}, logger);
    REQUIRE_FALSE(server.start());
    TestClient client(server.port());
    client.send(kLate);
    REQUIRE(eventually([&] { return handler.waiting() == 1; }));
    server.shutdown(milliseconds(50));
    CHECK_FALSE(client.read_response());
  }
  handler.release();
  CHECK(handler.waiting() == 0);
}

TEST_CASE("an address in use is an error with its reason") {
  EchoServer echo;
  ServerOptions options;
  options.port = echo.port();
  EchoHandler handler;
  Server second(handler, options, std::make_shared<spdlog::logger>("none"));
  const auto failure = second.start();
  REQUIRE(failure);
  CHECK(failure->find(std::to_string(echo.port())) != std::string::npos);
}

}  // namespace
}  // namespace bandwright
