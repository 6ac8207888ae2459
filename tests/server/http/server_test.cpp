#include "server/http/server.h"

#include <doctest/doctest.h>

#include <string>
#include <vector>

#include "tests/server/http/echo_server.h"

namespace bandwright {
namespace {

const std::string kPing = "GET /ping HTTP/1.1\r\nHost: localhost\r\n\r\n";

std::string post(const std::string& path, const std::string& body, const std::string& fields = "") {
  return "POST " + path +
         " HTTP/1.1\r\nHost: localhost\r\nContent-Length: " + std::to_string(body.size()) + "\r\n" +
         fields + "\r\n" + body;
}

TEST_CASE("a connection carries one request after another") {
  EchoServer echo;
  TestClient client(echo.port());
  for (int i = 0; i < 3; ++i) {
    client.send(post("/a", "hello"));
    const auto response = client.read_response();
    REQUIRE(response);
    CHECK(response->status == 200);
    CHECK(response->body == "POST /a\nhello");
    CHECK(response->header("connection") == "keep-alive");
    CHECK(response->header("date"));
    CHECK(response->header("x-request-id"));
  }
}

TEST_CASE("pipelined requests are answered each and in order") {
  EchoServer echo;
  TestClient client(echo.port());
  std::string all;
  for (int i = 0; i < 50; ++i) all += post("/" + std::to_string(i), std::string(300, 'x'));
  client.send(all);
  for (int i = 0; i < 50; ++i) {
    const auto response = client.read_response();
    REQUIRE(response);
    CHECK(response->body == "POST /" + std::to_string(i) + "\n" + std::string(300, 'x'));
  }
}

TEST_CASE("an empty line between requests is skipped") {
  EchoServer echo;
  TestClient client(echo.port());
  client.send(post("/a", "b") + "\r\n" + kPing);
  CHECK(client.read_response()->body == "POST /a\nb");
  CHECK(client.read_response()->body == "GET /ping\n");
}

TEST_CASE("HEAD has the head of GET and no body") {
  EchoServer echo;
  TestClient client(echo.port());
  client.send("HEAD /ping HTTP/1.1\r\nHost: localhost\r\n\r\n" + kPing);
  const auto head = client.read_response(true);
  REQUIRE(head);
  CHECK(head->header("content-length") == "10");
  CHECK(client.read_response()->body == "GET /ping\n");
}

TEST_CASE("Connection: close and HTTP/1.0 are answered and closed") {
  EchoServer echo;
  for (const char* request : {"GET /ping HTTP/1.1\r\nHost: a\r\nConnection: close\r\n\r\n",
                              "GET /ping HTTP/1.0\r\nHost: a\r\nConnection: keep-alive\r\n\r\n"}) {
    TestClient client(echo.port());
    client.send(request);
    const auto response = client.read_response();
    REQUIRE(response);
    CHECK(response->status == 200);
    CHECK(response->header("connection") == "close");
    CHECK(client.at_end());
  }
}

TEST_CASE("the last request a connection may carry says close") {
  ServerOptions options;
  options.requests_per_connection = 2;
  EchoServer echo(options);
  TestClient client(echo.port());
  client.send(kPing + kPing + kPing);
  CHECK(client.read_response()->header("connection") == "keep-alive");
  CHECK(client.read_response()->header("connection") == "close");
  CHECK(client.at_end());
}

TEST_CASE("a body is accepted at its limit and refused unread one past it") {
  EchoServer echo;
  const auto fits = ask(echo.port(), post("/a", std::string(echo.handler.max_body, 'x')));
  REQUIRE(fits);
  CHECK(fits->status == 200);

  TestClient client(echo.port());
  client.send("POST /a HTTP/1.1\r\nHost: a\r\nContent-Length: 1001\r\n\r\n");
  const auto refused = client.read_response();
  REQUIRE(refused);
  CHECK(refused->status == 413);
  CHECK(client.at_end());
  CHECK(echo.handler.requests == 1);
}

TEST_CASE("a client that sends a refused body in full still sees the refusal") {
  EchoServer echo;
  TestClient client(echo.port());
  client.send(post("/a", std::string(2'000'000, 'x')));
  const auto response = client.read_response();
  REQUIRE(response);
  CHECK(response->status == 413);
}

TEST_CASE("a huge Content-Length is 413") {
  EchoServer echo;
  for (const char* length : {"18446744073709551615", "99999999999999999999999999"}) {
    const auto response =
        ask(echo.port(),
            "POST /a HTTP/1.1\r\nHost: a\r\nContent-Length: " + std::string(length) + "\r\n\r\nx");
    REQUIRE(response);
    CHECK(response->status == 413);
  }
  CHECK(echo.answers());
}

TEST_CASE("a chunked body with a huge trailer is 411 and its bytes are no request") {
  EchoServer echo;
  TestClient client(echo.port());
  client.send("POST /a HTTP/1.1\r\nHost: a\r\nTransfer-Encoding: chunked\r\n\r\n0\r\nX-Trailer: " +
              std::string(65'540, 'x') + "\r\n\r\n" + kPing);
  const auto response = client.read_response();
  REQUIRE(response);
  CHECK(response->status == 411);
  CHECK(client.at_end());
  CHECK(echo.handler.requests == 0);
  CHECK(echo.answers());
}

TEST_CASE("a head is accepted at its limit and refused one past it, before it has ended") {
  ServerOptions options;
  options.head.head_bytes = 200;
  EchoServer echo(options);
  const auto head = [](std::size_t size) {
    const std::string begin = "GET / HTTP/1.1\r\nHost: a\r\nX: ";
    return begin + std::string(size - begin.size() - 4, 'x') + "\r\n\r\n";
  };
  CHECK(ask(echo.port(), head(200))->status == 200);
  CHECK(ask(echo.port(), head(201))->status == 431);
  CHECK(ask(echo.port(), head(5000).substr(0, 4000))->status == 431);
  CHECK(ask(echo.port(), "GET /" + std::string(4000, 'a'))->status == 414);
}

TEST_CASE("the server says 100 only to a client that waits for it and may go on") {
  EchoServer echo;
  TestClient client(echo.port());
  const std::string head =
      "POST /a HTTP/1.1\r\nHost: a\r\nExpect: 100-continue\r\nContent-Length: ";
  client.send(head + "3\r\n\r\n");
  CHECK(client.read_response()->status == 100);
  client.send("abc");
  CHECK(client.read_response()->body == "POST /a\nabc");

  TestClient refused(echo.port());
  refused.send(head + "5000\r\n\r\n");
  CHECK(refused.read_response()->status == 413);
}

TEST_CASE("a request answered from its head leaves the body unread and the connection closed") {
  EchoServer echo;
  TestClient client(echo.port());
  client.send(post("/refuse", "body"));
  CHECK(client.read_response()->status == 401);
  CHECK(client.at_end());

  TestClient bodiless(echo.port());
  bodiless.send("GET /refuse HTTP/1.1\r\nHost: a\r\n\r\n" + kPing);
  CHECK(bodiless.read_response()->status == 401);
  CHECK(bodiless.read_response()->status == 200);
}

TEST_CASE("a handler that throws, forgets or misnumbers its answer gives 500 with the id only") {
  EchoServer echo;
  for (const char* path : {"/throw", "/throw-int", "/throw-head", "/lose", "/status-42"}) {
    CAPTURE(path);
    const auto response =
        ask(echo.port(), "GET " + std::string(path) + " HTTP/1.1\r\nHost: a\r\n\r\n");
    REQUIRE(response);
    CHECK(response->status == 500);
    CHECK(response->body.find("purpose") == std::string::npos);
    CHECK(response->body.find(*response->header("x-request-id")) != std::string::npos);
  }
  CHECK(echo.answers());
}

TEST_CASE("of two answers to one request the first counts") {
  EchoServer echo;
  TestClient client(echo.port());
  client.send("GET /twice HTTP/1.1\r\nHost: a\r\n\r\n" + kPing);
  CHECK(client.read_response()->body == "GET /twice\n");
  CHECK(client.read_response()->body == "GET /ping\n");
}

TEST_CASE("a handler cannot split the response") {
  EchoServer echo;
  TestClient client(echo.port());
  client.send("GET /evil HTTP/1.1\r\nHost: a\r\n\r\n" + kPing);
  const auto response = client.read_response();
  REQUIRE(response);
  CHECK(response->body == "body");
  CHECK_FALSE(response->header("set-cookie"));
  CHECK(response->header("x-fine") == "d");
  CHECK(client.read_response()->body == "GET /ping\n");
}

TEST_CASE("204 is sent without a body and the connection goes on") {
  EchoServer echo;
  TestClient client(echo.port());
  client.send("GET /status-204 HTTP/1.1\r\nHost: a\r\n\r\n" + kPing);
  CHECK(client.read_response()->status == 204);
  CHECK(client.read_response()->status == 200);
}

TEST_CASE("an answer given later from another thread arrives") {
  EchoServer echo;
  TestClient client(echo.port());
  client.send("GET /late HTTP/1.1\r\nHost: a\r\n\r\n");
  REQUIRE(eventually([&] { return echo.handler.waiting() == 1; }));
  echo.handler.release();
  CHECK(client.read_response()->body == "late");
}

TEST_CASE("each request leaves one line in the log, and the faults too") {
  EchoServer echo;
  ask(echo.port(), kPing);
  ask(echo.port(), "GET /a\"b HTTP/1.1\r\nHost: a\r\n\r\n");
  echo.server().shutdown(std::chrono::seconds(1));
  const std::string log = echo.log();
  CHECK(log.find(R"("method":"GET","path":"/ping","status":200)") != std::string::npos);
  CHECK(log.find(R"("method":"-","path":"-","status":400)") != std::string::npos);
}

}  // namespace
}  // namespace bandwright
