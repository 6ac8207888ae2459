// Requests and responses as the rest of the server sees them: no protocol library in sight.
#pragma once

#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <string_view>
#include <utility>
#include <variant>
#include <vector>

namespace bandwright {

struct HeaderField {
  std::string name;  // as sent in responses; lower case in requests
  std::string value;
};

struct RequestHead {
  std::string method;  // "GET"
  std::string path;    // percent-decoded, begins with '/', no query
  std::vector<std::pair<std::string, std::string>> query;  // decoded, in order
  std::vector<HeaderField> headers;
  std::uint64_t content_length = 0;
  std::string remote_address;
  std::string request_id;  // unique to this request, safe to show

  // The first field called `lower_case_name`, if any.
  std::optional<std::string_view> header(std::string_view lower_case_name) const {
    for (const HeaderField& field : headers) {
      if (field.name == lower_case_name) return field.value;
    }
    return std::nullopt;
  }
};

struct Request {
  RequestHead head;
  std::string body;
};

struct Response {
  int status = 200;
  std::vector<HeaderField> headers;  // Content-Length, Date and Connection are added on the way out
  std::string body;
  bool close = false;  // close the connection after this response
};

// Accepts a body of at most this many bytes.
struct AcceptBody {
  std::uint64_t max_bytes = 0;
};
// The head alone decides: read the body or answer at once.
using HeadDecision = std::variant<AcceptBody, Response>;

// Sends the one response of a request. May be called later and from any thread; calls after the
// first, or after the client has gone, do nothing.
using Respond = std::function<void(Response)>;

// What a server serves. Thread safety: both members are called from many threads at once.
// `on_head` must not block; `on_request` may (it runs on a worker thread of the server).
class Handler {
 public:
  virtual ~Handler() = default;
  virtual HeadDecision on_head(const RequestHead& head) = 0;
  virtual void on_request(Request request, Respond respond) = 0;
  // The response for a fault the transport found itself: 400, 408, 411, 413, 414, 431, 500, 503...
  virtual Response on_fault(int status, std::string_view detail, std::string_view request_id) = 0;
};

}  // namespace bandwright
