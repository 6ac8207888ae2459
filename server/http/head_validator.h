// The strict gate in front of every request: raw head bytes in, a checked head or a fault out.
//
// Two servers that read the same bytes differently can be played against each other (request
// smuggling), so whatever RFC 9112 leaves to taste is refused here: bare CR or LF, folded lines,
// space before the colon, repeated framing fields, any transfer coding. Nothing is repaired, with
// one exception the RFC asks for: a single empty line before the request line is skipped (2.2).
//
// Sources: RFC 9110 (fields, methods), RFC 9112 (message syntax), RFC 3986 (target).
//
// Pure functions without state: any thread, no I/O.
#pragma once

#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>

#include "server/message/http.h"
#include "solver/base/result.h"

namespace bandwright {

struct HeadLimits {
  std::size_t head_bytes = 16 * 1024;   // with the empty line that ends it: 431
  std::size_t fields = 64;              // 431
  std::size_t field_bytes = 8 * 1024;   // one line without its CRLF: 431
  std::size_t target_bytes = 2 * 1024;  // 414
};

// Where a head ends in bytes that are still arriving.
struct HeadSpan {
  enum class State { incomplete, complete, malformed };
  State state = State::incomplete;
  std::size_t begin = 0;  // 2 after a skipped empty line
  std::size_t end = 0;    // one past the empty line; set when complete
};

// Looks for the end of the head, and for bytes that no later byte can make good: a bare CR or LF,
// NUL, a second empty line in front. The first `checked` bytes were looked at by an earlier call.
HeadSpan find_head(std::string_view bytes, std::size_t checked);

struct ParsedHead {
  RequestHead head;  // without remote_address and request_id
  bool keep_alive = true;
  bool expect_continue = false;
};

struct HeadFault {
  int status = 400;
  std::string detail;
};

// `bytes` is the whole head with the empty line that ends it.
Result<ParsedHead, HeadFault> parse_head(std::string_view bytes, const HeadLimits& limits);

// A token of RFC 9110, 5.6.2: what names and methods are made of.
bool is_http_token(std::string_view text);
// Nothing but visible characters, space, tab and bytes above 127: RFC 9110, 5.5.
bool is_field_text(std::string_view text);

}  // namespace bandwright
