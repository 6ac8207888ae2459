// A response's head as bytes: status line, the fields of the handler, the fields of the transport.
#pragma once

#include <chrono>
#include <string>
#include <string_view>

#include "server/message/http.h"

namespace bandwright {

struct ResponseFraming {
  bool keep_alive = true;
  std::string_view request_id;
  std::chrono::system_clock::time_point date;
};

// With the empty line that ends it. Framing belongs to the transport: what the handler says about
// Content-Length, Transfer-Encoding, Connection, Date and X-Request-Id is left out, and so is a
// field whose name or value would break the framing.
std::string response_head(const Response& response, const ResponseFraming& framing);

// Whether a response of this status may carry a body: RFC 9110, 15.3.5 and 15.4.5.
bool status_has_body(int status);

// "Sun, 06 Nov 1994 08:49:37 GMT": RFC 9110, 5.6.7.
std::string http_date(std::chrono::system_clock::time_point time);

}  // namespace bandwright
