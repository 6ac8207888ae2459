#include "server/http/head_validator.h"

#include <doctest/doctest.h>

#include <string>

namespace bandwright {
namespace {

constexpr HeadLimits kLimits;

// The status parse_head answers, 0 for an accepted head.
int status_of(const std::string& head, const HeadLimits& limits = kLimits) {
  const auto parsed = parse_head(head, limits);
  return parsed ? 0 : parsed.error().status;
}

std::string with_line(const std::string& request_line) {
  return request_line + "\r\nHost: localhost\r\n\r\n";
}

std::string with_fields(const std::string& fields, const std::string& method = "GET") {
  return method + " / HTTP/1.1\r\nHost: localhost\r\n" + fields + "\r\n";
}

ParsedHead accepted(const std::string& head) {
  auto parsed = parse_head(head, kLimits);
  REQUIRE_MESSAGE(parsed.ok(), head);
  return *parsed;
}

TEST_CASE("a plain head is read into method, path, query and fields") {
  const ParsedHead parsed = accepted(
      "POST /v1/a%20b?x=1&y=%C3%A9+z&flag HTTP/1.1\r\nHOST: localhost:80\r\nX-Two:  a b\t\r\n"
      "Content-Length: 12\r\nX-Empty:\r\n\r\n");
  CHECK(parsed.head.method == "POST");
  CHECK(parsed.head.path == "/v1/a b");
  REQUIRE(parsed.head.query.size() == 3);
  CHECK(parsed.head.query[0] == std::pair<std::string, std::string>("x", "1"));
  CHECK(parsed.head.query[1] == std::pair<std::string, std::string>("y", "\xC3\xA9 z"));
  CHECK(parsed.head.query[2] == std::pair<std::string, std::string>("flag", ""));
  CHECK(parsed.head.header("host") == "localhost:80");
  CHECK(parsed.head.header("x-two") == "a b");
  CHECK(parsed.head.header("x-empty") == "");
  CHECK(parsed.head.content_length == 12);
  CHECK(parsed.keep_alive);
  CHECK_FALSE(parsed.expect_continue);
}

TEST_CASE("a request line other than method, space, target, space, version is refused") {
  for (const char* line :
       {"", "GET", "GET /", "GET  / HTTP/1.1", "GET / HTTP/1.1 ", " GET / HTTP/1.1",
        "GET /  HTTP/1.1", "GET\t/ HTTP/1.1", "GET /a b HTTP/1.1", "G@T / HTTP/1.1",
        "GET / http/1.1", "GET / HTTP/1", "GET / HTTP/1.10", "GET / HTTP/11", "GET / HTTP/x.1",
        "GET / ICE/1.0", "GET / HTTP/1.1x", "GET HTTP/1.1"}) {
    CAPTURE(line);
    CHECK(status_of(with_line(line)) == 400);
  }
}

TEST_CASE("an unknown method is 501 and an unknown version 505") {
  for (const char* method : {"CONNECT", "TRACE", "PRI", "BREW", "get"}) {
    CHECK(status_of(with_line(std::string(method) + " / HTTP/1.1")) == 501);
  }
  for (const char* version : {"HTTP/2.0", "HTTP/0.9", "HTTP/1.2", "HTTP/5.6"}) {
    CHECK(status_of(with_line("GET / " + std::string(version))) == 505);
  }
  for (const char* method : {"GET", "HEAD", "POST", "PUT", "DELETE", "PATCH", "OPTIONS"}) {
    CHECK(status_of(with_line(std::string(method) + " / HTTP/1.1")) == 0);
  }
}

TEST_CASE("only origin-form targets of RFC 3986 characters are accepted") {
  for (const char* target : {"*",
                             "http://localhost/",
                             "localhost:80",
                             "x",
                             "/a#b",
                             "/\xC3\xA9",
                             "/a%",
                             "/a%4",
                             "/a%zz",
                             "/a?b=%g0",
                             "/a\x7f",
                             "/a\x01",
                             "/a\tb",
                             "/a\"b",
                             "/a<b",
                             "/a\\b",
                             "/a|b",
                             "/a{b}",
                             "/a^b",
                             "/a`b",
                             "/%00",
                             "/a%0d%0aX",
                             "/?a=%00",
                             "/?%0a=1"}) {
    CAPTURE(target);
    CHECK(status_of(with_line("GET " + std::string(target) + " HTTP/1.1")) == 400);
  }
  for (const char* target : {"/", "/a/b;c=d,e!$&'()*+:@~_.-", "/a?b=c/d?e", "//a", "/?", "/%7e"}) {
    CAPTURE(target);
    CHECK(status_of(with_line("GET " + std::string(target) + " HTTP/1.1")) == 0);
  }
}

TEST_CASE("bare CR, bare LF and NUL are refused wherever they stand") {
  using namespace std::string_literals;
  for (const std::string& head :
       {"GET / HTTP/1.1\nHost: a\r\n\r\n"s, "GET / HTTP/1.1\rHost: a\r\n\r\n"s,
        "GET / HTTP/1.1\r\nHost: a\n\r\n"s, "GET / HTTP/1.1\r\nHost: a\r\n\n"s,
        "GET / HTTP/1.1\r\nHost: a\rb\r\n\r\n"s, "GET / HTTP/1.1\r\nHost: a\r\r\n\r\n"s,
        "GET / HTTP/1.1\r\nHost: a\r\nX: \0\r\n\r\n"s, "GET /\0 HTTP/1.1\r\nHost: a\r\n\r\n"s,
        "\r\nGET / HTTP/1.1\r\nHost: a\r\n\r\n"s}) {
    CAPTURE(head);
    CHECK(status_of(head) == 400);
  }
}

TEST_CASE("a head that does not end, or goes on after its end, is refused") {
  CHECK(status_of("") == 400);
  CHECK(status_of("GET / HTTP/1.1") == 400);
  CHECK(status_of("GET / HTTP/1.1\r\nHost: a\r\n") == 400);
  CHECK(status_of("GET / HTTP/1.1\r\nHost: a\r\n\r\nX") == 400);
}

TEST_CASE("a malformed header line is refused") {
  for (const char* line : {"X-A : b\r\n", " X-A: b\r\n", "X-A: b\r\n c\r\n", "X-A: b\r\n\tc\r\n",
                           "X-A\r\n", ": b\r\n", "X A: b\r\n", "X\xC3\xA9: b\r\n", "X(A): b\r\n",
                           "X-A: b\x01\r\n", "X-A: b\x7f\r\n", "X-A: \x0c\r\n", "X-A\t: b\r\n"}) {
    CAPTURE(line);
    CHECK(status_of(with_fields(line)) == 400);
  }
  CHECK(status_of(with_fields("X-A: tab\there \xE9\r\n")) == 0);
}

TEST_CASE("exactly one sound Host is needed, from HTTP/1.0 too") {
  CHECK(status_of("GET / HTTP/1.1\r\n\r\n") == 400);
  CHECK(status_of("GET / HTTP/1.0\r\n\r\n") == 400);
  CHECK(status_of(with_fields("host: localhost\r\n")) == 400);
  for (const char* host :
       {"", "a b", "u@a", "a/b", "a?b", "a#b", "a:b", "[::1", "\"a\"", "a:80:80", ":80", "a\xE9"}) {
    CAPTURE(host);
    CHECK(status_of("GET / HTTP/1.1\r\nHost: " + std::string(host) + "\r\n\r\n") == 400);
  }
  for (const char* host : {"a", "a:80", "127.0.0.1:8080", "[::1]", "[::1]:80", "under_score"}) {
    CAPTURE(host);
    CHECK(status_of("GET / HTTP/1.1\r\nHost: " + std::string(host) + "\r\n\r\n") == 0);
  }
}

TEST_CASE("framing fields that could be read in two ways are refused") {
  const auto post = [](const std::string& fields) {
    return status_of(with_fields(fields, "POST"));
  };
  CHECK(post("Content-Length: 1\r\nContent-Length: 1\r\n") == 400);
  CHECK(post("Content-Length: 1\r\ncontent-length: 2\r\n") == 400);
  for (const char* length : {"", "+1", "-1", "1 2", "0x1", "1,1", "1.0", "1a", "\xD9\xA1"}) {
    CAPTURE(length);
    CHECK(post("Content-Length: " + std::string(length) + "\r\n") == 400);
  }
  CHECK(post("Content-Length: 3\r\nTransfer-Encoding: chunked\r\n") == 400);
  CHECK(post("Transfer-Encoding: identity\r\nContent-Length: 3\r\n") == 400);
}

TEST_CASE("any Transfer-Encoding alone is 411") {
  for (const char* coding : {"chunked", "identity", "gzip, chunked", "", "xchunked", "\tchunked"}) {
    CAPTURE(coding);
    CHECK(status_of(with_fields("Transfer-Encoding: " + std::string(coding) + "\r\n", "POST")) ==
          411);
  }
}

TEST_CASE("a Content-Length beyond 64 bits stays too large instead of wrapping") {
  const std::string fields = "Content-Length: 18446744073709551617\r\n";
  CHECK(accepted(with_fields(fields, "POST")).head.content_length == UINT64_MAX);
  CHECK(accepted(with_fields("Content-Length: 0005\r\n", "POST")).head.content_length == 5);
}

TEST_CASE("GET, HEAD and DELETE take no body, but may say so") {
  for (const char* method : {"GET", "HEAD", "DELETE"}) {
    CHECK(status_of(with_fields("Content-Length: 1\r\n", method)) == 400);
    CHECK(status_of(with_fields("Content-Length: 0\r\n", method)) == 0);
  }
  CHECK(status_of(with_fields("Content-Length: 1\r\n", "PUT")) == 0);
}

TEST_CASE("fields that decide who asks, or what, may come once") {
  for (const char* name : {"Authorization", "Content-Type", "Idempotency-Key"}) {
    const std::string line = std::string(name) + ": x\r\n";
    CHECK(status_of(with_fields(line)) == 0);
    CHECK(status_of(with_fields(line + line)) == 400);
  }
  CHECK(status_of(with_fields("Accept: a\r\nAccept: b\r\n")) == 0);
}

TEST_CASE("a connection stays open unless the client says close or speaks HTTP/1.0") {
  CHECK_FALSE(accepted(with_fields("Connection: close\r\n")).keep_alive);
  CHECK_FALSE(accepted(with_fields("Connection: x , CLOSE\t\r\n")).keep_alive);
  CHECK(accepted(with_fields("Connection: closed\r\n")).keep_alive);
  CHECK_FALSE(accepted("GET / HTTP/1.0\r\nHost: a\r\nConnection: keep-alive\r\n\r\n").keep_alive);
}

TEST_CASE("an expectation other than 100-continue is 417") {
  CHECK(accepted(with_fields("Expect: 100-Continue\r\n", "POST")).expect_continue);
  CHECK(status_of(with_fields("Expect: more\r\n", "POST")) == 417);
  CHECK_FALSE(
      accepted("POST / HTTP/1.0\r\nHost: a\r\nExpect: 100-continue\r\n\r\n").expect_continue);
}

TEST_CASE("each limit holds at the limit and refuses one past it") {
  const auto target = [](std::size_t size) {
    return with_line("GET /" + std::string(size - 1, 'a') + " HTTP/1.1");
  };
  CHECK(status_of(target(kLimits.target_bytes)) == 0);
  CHECK(status_of(target(kLimits.target_bytes + 1)) == 414);

  const auto field = [](std::size_t size) {
    return with_fields("X: " + std::string(size - 3, 'a') + "\r\n");
  };
  CHECK(status_of(field(kLimits.field_bytes)) == 0);
  CHECK(status_of(field(kLimits.field_bytes + 1)) == 431);

  const auto fields = [](std::size_t count) {
    std::string text;
    for (std::size_t i = 1; i < count; ++i) text += "X: y\r\n";  // Host is one
    return with_fields(text);
  };
  CHECK(status_of(fields(kLimits.fields)) == 0);
  CHECK(status_of(fields(kLimits.fields + 1)) == 431);

  const auto head = [](std::size_t size) {
    const std::size_t frame = with_fields("A: \r\nB: \r\nC: \r\n").size();
    const std::string part(5000, 'a');
    return with_fields("A: " + part + "\r\nB: " + part +
                       "\r\nC: " + std::string(size - frame - 10000, 'c') + "\r\n");
  };
  REQUIRE(head(kLimits.head_bytes).size() == kLimits.head_bytes);
  CHECK(status_of(head(kLimits.head_bytes)) == 0);
  CHECK(status_of(head(kLimits.head_bytes + 1)) == 431);
}

TEST_CASE("the end of a head is found the same way however its bytes arrive") {
  const std::string bytes = "\r\nGET / HTTP/1.1\r\nHost: a\r\n\r\nrest";
  const HeadSpan whole = find_head(bytes, 0);
  REQUIRE(whole.state == HeadSpan::State::complete);
  CHECK(whole.begin == 2);
  CHECK(bytes.substr(whole.end) == "rest");
  for (std::size_t size = 1; size <= whole.end; ++size) {
    const HeadSpan span = find_head(std::string_view(bytes).substr(0, size), size - 1);
    CHECK((span.state == HeadSpan::State::complete) == (size == whole.end));
    CHECK(span.state != HeadSpan::State::malformed);
  }
}

TEST_CASE("bytes no later byte can make good are refused before the head has ended") {
  using namespace std::string_literals;
  for (const std::string& bytes :
       {"GET / HTTP/1.1\n"s, "GET /\rx"s, "\n"s, "\r\n\r\n"s, "\0"s, "\x16\x03\x01\0"s}) {
    CAPTURE(bytes);
    CHECK(find_head(bytes, 0).state == HeadSpan::State::malformed);
    CHECK(find_head(bytes, bytes.size() - 1).state == HeadSpan::State::malformed);
  }
}

}  // namespace
}  // namespace bandwright
