#include "server/http/response_head.h"

#include <doctest/doctest.h>

namespace bandwright {
namespace {

const ResponseFraming kFraming{true, "rq_1", std::chrono::system_clock::from_time_t(784111777)};

TEST_CASE("a response head is status line, date, id, fields, length and connection") {
  CHECK(response_head(Response{422, {{"Content-Type", "text/plain"}}, "abc", false}, kFraming) ==
        "HTTP/1.1 422 Unprocessable Entity\r\nDate: Sun, 06 Nov 1994 08:49:37 GMT\r\n"
        "X-Request-Id: rq_1\r\nContent-Type: text/plain\r\nContent-Length: 3\r\n"
        "Connection: keep-alive\r\n\r\n");
}

// The example of RFC 9110, 5.6.7.
TEST_CASE("a date is in the preferred form of the standard") {
  CHECK(http_date(std::chrono::system_clock::from_time_t(784111777)) ==
        "Sun, 06 Nov 1994 08:49:37 GMT");
}

TEST_CASE("204 and 304 announce no body") {
  for (const int status : {204, 304}) {
    const std::string head = response_head(Response{status, {}, "", false}, kFraming);
    CHECK(head.find("Content-Length") == std::string::npos);
  }
}

TEST_CASE("no field of a handler can break the framing") {
  const Response response{200,
                          {{"X-A", "b\r\nX-B: c"},
                           {"X\r\nY", "d"},
                           {"content-LENGTH", "9"},
                           {"Transfer-Encoding", "chunked"},
                           {"X-Fine", "yes"}},
                          "abc",
                          false};
  const std::string head = response_head(response, kFraming);
  CHECK(head.find("X-B") == std::string::npos);
  CHECK(head.find("\r\nY") == std::string::npos);
  CHECK(head.find("9\r\n") == std::string::npos);
  CHECK(head.find("chunked") == std::string::npos);
  CHECK(head.find("X-Fine: yes\r\n") != std::string::npos);
}

}  // namespace
}  // namespace bandwright
