#include "server/http/head_validator.h"

#include <algorithm>
#include <array>
#include <boost/url/authority_view.hpp>
#include <boost/url/parse.hpp>
#include <boost/url/url_view.hpp>
#include <charconv>
#include <limits>
#include <optional>

#include "server/http/field_list.h"

namespace bandwright {
namespace {

using Fault = std::optional<HeadFault>;

HeadFault bad_request(std::string detail) {
  return {400, std::move(detail)};
}

bool is_control(char c) {
  const auto byte = static_cast<unsigned char>(c);
  return byte < 0x20 || byte == 0x7f;
}

// Takes one line off the front of `rest`; every line of a head found by find_head ends in CRLF.
std::optional<std::string_view> take_line(std::string_view& rest) {
  const std::size_t end = rest.find("\r\n");
  if (end == std::string_view::npos) return std::nullopt;
  const std::string_view line = rest.substr(0, end);
  rest.remove_prefix(end + 2);
  return line;
}

Fault check_version(std::string_view version) {
  const auto digit = [](char c) { return c >= '0' && c <= '9'; };
  const bool well_formed = version.size() == 8 && version.substr(0, 5) == "HTTP/" &&
                           digit(version[5]) && version[6] == '.' && digit(version[7]);
  if (!well_formed) return bad_request("the request line does not end in HTTP/1.1");
  if (version != "HTTP/1.1" && version != "HTTP/1.0") {
    return HeadFault{505, "this service speaks HTTP/1.1"};
  }
  return std::nullopt;
}

Fault check_method(std::string_view method) {
  constexpr std::array<std::string_view, 7> known = {"GET",    "HEAD",  "POST",   "PUT",
                                                     "DELETE", "PATCH", "OPTIONS"};
  if (!is_http_token(method)) return bad_request("the method is not a token");
  if (std::find(known.begin(), known.end(), method) != known.end()) return std::nullopt;
  return HeadFault{501, "this service does not know the method"};
}

bool has_control(std::string_view text) {
  return std::any_of(text.begin(), text.end(), is_control);
}

Fault read_target(std::string_view target, RequestHead& head) {
  if (target.empty() || target.front() != '/') {
    return bad_request("the target must be in origin form: it begins with '/'");
  }
  const auto url = boost::urls::parse_origin_form({target.data(), target.size()});
  if (!url) {
    return bad_request("the target holds a character or a percent escape that RFC 3986 forbids");
  }
  head.path = url->path();
  if (has_control(head.path)) return bad_request("the path holds a control character");
  for (const auto& parameter : url->params()) {
    if (has_control(parameter.key) || has_control(parameter.value)) {
      return bad_request("the query holds a control character");
    }
    head.query.emplace_back(parameter.key, parameter.value);
  }
  return std::nullopt;
}

// Leaves the version in `version`: whether the connection can stay open depends on it.
Fault read_request_line(std::string_view line, const HeadLimits& limits, RequestHead& head,
                        std::string_view& version) {
  const std::size_t first = line.find(' ');
  const std::size_t last = line.rfind(' ');
  if (first == std::string_view::npos || first == last) {
    return bad_request("the request line is not: method, space, target, space, version");
  }
  const std::string_view method = line.substr(0, first);
  const std::string_view target = line.substr(first + 1, last - first - 1);
  version = line.substr(last + 1);
  if (target.size() > limits.target_bytes) {
    return HeadFault{414,
                     "the target is longer than " + std::to_string(limits.target_bytes) + " bytes"};
  }
  if (Fault fault = check_version(version)) return fault;
  if (Fault fault = check_method(method)) return fault;
  head.method = method;
  return read_target(target, head);
}

Fault read_field(std::string_view line, RequestHead& head) {
  if (line.front() == ' ' || line.front() == '\t') {
    return bad_request("a header line begins with a space: folded lines are not accepted");
  }
  const std::size_t colon = line.find(':');
  if (colon == std::string_view::npos) return bad_request("a header line has no colon");
  const std::string_view name = line.substr(0, colon);
  if (!is_http_token(name)) return bad_request("a header name is not a token");
  const std::string_view value = trim_spaces(line.substr(colon + 1));
  if (!is_field_text(value)) return bad_request("a header value holds a control character");
  head.headers.push_back({ascii_lower(name), std::string(value)});
  return std::nullopt;
}

Fault read_fields(std::string_view rest, const HeadLimits& limits, RequestHead& head) {
  for (;;) {
    const std::optional<std::string_view> line = take_line(rest);
    if (!line) return bad_request("the head does not end in an empty line");
    if (line->empty()) break;
    if (head.headers.size() == limits.fields) {
      return HeadFault{431, "more than " + std::to_string(limits.fields) + " header fields"};
    }
    if (line->size() > limits.field_bytes) {
      return HeadFault{
          431, "a header field is longer than " + std::to_string(limits.field_bytes) + " bytes"};
    }
    if (Fault fault = read_field(*line, head)) return fault;
  }
  if (!rest.empty()) return bad_request("bytes follow the empty line that ends the head");
  return std::nullopt;
}

std::size_t count(const RequestHead& head, std::string_view name) {
  return static_cast<std::size_t>(
      std::count_if(head.headers.begin(), head.headers.end(),
                    [name](const HeaderField& field) { return field.name == name; }));
}

Fault check_host(const RequestHead& head) {
  if (count(head, "host") != 1) return bad_request("exactly one Host field is needed");
  const std::string_view host = *head.header("host");
  const auto authority = boost::urls::parse_authority({host.data(), host.size()});
  if (!authority || authority->has_userinfo() || authority->encoded_host().empty()) {
    return bad_request("the Host field is not a host with an optional port");
  }
  return std::nullopt;
}

Fault check_repeats(const RequestHead& head) {
  constexpr std::array<std::string_view, 3> once = {"authorization", "content-type",
                                                    "idempotency-key"};
  for (const std::string_view name : once) {
    if (count(head, name) > 1)
      return bad_request("the field " + std::string(name) + " is repeated");
  }
  return std::nullopt;
}

// A length beyond 64 bits is well formed and refused later, as any other that is too large.
std::optional<std::uint64_t> read_length(std::string_view text) {
  if (text.empty() || text.find_first_not_of("0123456789") != std::string_view::npos) {
    return std::nullopt;
  }
  std::uint64_t length = 0;
  const auto read = std::from_chars(text.data(), text.data() + text.size(), length);
  if (read.ec == std::errc::result_out_of_range) return std::numeric_limits<std::uint64_t>::max();
  return length;
}

Fault check_framing(RequestHead& head) {
  const std::size_t lengths = count(head, "content-length");
  const bool coded = count(head, "transfer-encoding") > 0;
  if (lengths > 1) return bad_request("more than one Content-Length");
  if (lengths == 1 && coded) return bad_request("Content-Length together with Transfer-Encoding");
  if (coded) return HeadFault{411, "send the body with a Content-Length, not a transfer coding"};
  if (lengths == 0) return std::nullopt;
  const std::optional<std::uint64_t> length = read_length(*head.header("content-length"));
  if (!length) return bad_request("the Content-Length is not a decimal number");
  const bool bodiless = head.method == "GET" || head.method == "HEAD" || head.method == "DELETE";
  if (*length > 0 && bodiless) return bad_request(head.method + " takes no body");
  head.content_length = *length;
  return std::nullopt;
}

Fault read_connection(std::string_view version, ParsedHead& parsed) {
  parsed.keep_alive = version == "HTTP/1.1";
  for (const HeaderField& field : parsed.head.headers) {
    if (field.name == "connection" && list_contains(field.value, "close")) {
      parsed.keep_alive = false;
    }
    if (field.name == "expect" && version == "HTTP/1.1") {
      if (ascii_lower(field.value) != "100-continue") {
        return HeadFault{417, "only the expectation 100-continue can be met"};
      }
      parsed.expect_continue = true;
    }
  }
  return std::nullopt;
}

}  // namespace

bool is_http_token(std::string_view text) {
  constexpr std::string_view marks = "!#$%&'*+-.^_`|~";
  const auto allowed = [marks](char c) {
    return (c >= '0' && c <= '9') || (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') ||
           marks.find(c) != std::string_view::npos;
  };
  return !text.empty() && std::all_of(text.begin(), text.end(), allowed);
}

bool is_field_text(std::string_view text) {
  return std::none_of(text.begin(), text.end(), [](char c) { return is_control(c) && c != '\t'; });
}

HeadSpan find_head(std::string_view bytes, std::size_t checked) {
  constexpr std::string_view end_mark = "\r\n\r\n";
  HeadSpan span;
  span.begin = bytes.substr(0, 2) == "\r\n" ? 2 : 0;
  for (std::size_t i = checked; i < bytes.size(); ++i) {
    const bool after_cr = i > 0 && bytes[i - 1] == '\r';
    const bool is_lf = bytes[i] == '\n';
    const bool second_empty_line = i == 3 && span.begin == 2 && is_lf && after_cr;
    if (bytes[i] == '\0' || after_cr != is_lf || second_empty_line) {
      span.state = HeadSpan::State::malformed;
      return span;
    }
    if (i >= span.begin + 3 && bytes.substr(i - 3, 4) == end_mark) {
      span.state = HeadSpan::State::complete;
      span.end = i + 1;
      return span;
    }
  }
  return span;
}

Result<ParsedHead, HeadFault> parse_head(std::string_view bytes, const HeadLimits& limits) {
  if (bytes.size() > limits.head_bytes) {
    return HeadFault{431,
                     "the head is longer than " + std::to_string(limits.head_bytes) + " bytes"};
  }
  const HeadSpan span = find_head(bytes, 0);
  if (span.state == HeadSpan::State::malformed || span.begin != 0) {
    return bad_request("a line does not end in CRLF, or a byte is NUL");
  }
  ParsedHead parsed;
  std::string_view rest = bytes;
  std::string_view version;
  const std::optional<std::string_view> request_line = take_line(rest);
  if (!request_line) return bad_request("the request line does not end");
  if (Fault fault = read_request_line(*request_line, limits, parsed.head, version)) return *fault;
  if (Fault fault = read_fields(rest, limits, parsed.head)) return *fault;
  if (Fault fault = check_host(parsed.head)) return *fault;
  if (Fault fault = check_repeats(parsed.head)) return *fault;
  if (Fault fault = check_framing(parsed.head)) return *fault;
  if (Fault fault = read_connection(version, parsed)) return *fault;
  return parsed;
}

}  // namespace bandwright
