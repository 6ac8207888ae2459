#include "server/http/response_head.h"

#include <algorithm>
#include <array>
#include <boost/beast/http/status.hpp>
#include <cstdio>
#include <ctime>

#include "server/http/field_list.h"
#include "server/http/head_validator.h"

namespace bandwright {
namespace {

bool belongs_to_transport(std::string_view name) {
  constexpr std::array<std::string_view, 5> own = {"content-length", "transfer-encoding",
                                                   "connection", "date", "x-request-id"};
  return std::find(own.begin(), own.end(), ascii_lower(name)) != own.end();
}

void append_field(std::string& head, std::string_view name, std::string_view value) {
  head.append(name).append(": ").append(value).append("\r\n");
}

}  // namespace

bool status_has_body(int status) {
  return status >= 200 && status != 204 && status != 304;
}

std::string http_date(std::chrono::system_clock::time_point time) {
  // Names of its own: strftime would follow the locale.
  constexpr std::array<const char*, 7> days = {"Sun", "Mon", "Tue", "Wed", "Thu", "Fri", "Sat"};
  constexpr std::array<const char*, 12> months = {"Jan", "Feb", "Mar", "Apr", "May", "Jun",
                                                  "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};
  const std::time_t seconds = std::chrono::system_clock::to_time_t(time);
  std::tm utc{};
  gmtime_r(&seconds, &utc);
  std::array<char, 64> text{};
  std::snprintf(text.data(), text.size(), "%s, %02d %s %04d %02d:%02d:%02d GMT",
                days[static_cast<std::size_t>(utc.tm_wday)], utc.tm_mday,
                months[static_cast<std::size_t>(utc.tm_mon)], utc.tm_year + 1900, utc.tm_hour,
                utc.tm_min, utc.tm_sec);
  return text.data();
}

std::string response_head(const Response& response, const ResponseFraming& framing) {
  namespace http = boost::beast::http;
  const http::status status = http::int_to_status(static_cast<unsigned>(response.status));
  std::string head = "HTTP/1.1 " + std::to_string(response.status) + ' ';
  head.append(std::string_view(http::obsolete_reason(status))).append("\r\n");
  append_field(head, "Date", http_date(framing.date));
  append_field(head, "X-Request-Id", framing.request_id);
  for (const HeaderField& field : response.headers) {
    const bool sound = is_http_token(field.name) && is_field_text(field.value);
    if (sound && !belongs_to_transport(field.name)) append_field(head, field.name, field.value);
  }
  if (status_has_body(response.status)) {
    append_field(head, "Content-Length", std::to_string(response.body.size()));
  }
  append_field(head, "Connection", framing.keep_alive ? "keep-alive" : "close");
  return head.append("\r\n");
}

}  // namespace bandwright
