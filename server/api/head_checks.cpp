#include "server/api/head_checks.h"

#include <algorithm>
#include <string>

#include "server/api/field_value.h"
#include "server/api/nearest_name.h"
#include "server/api/negotiation.h"
#include "server/api/problem_details.h"

namespace bandwright {
namespace {

std::string joined(std::span<const std::string_view> words) {
  std::string out;
  for (const std::string_view word : words) {
    if (!out.empty()) out += ", ";
    out += word;
  }
  return out;
}

bool changes_state(const RequestHead& head) {
  return head.method != "GET" && head.method != "HEAD" && head.method != "OPTIONS";
}

// Without ":8080"; an address in brackets keeps its colons.
std::string_view without_port(std::string_view host) {
  const std::size_t colon = host.rfind(':');
  const std::size_t bracket = host.rfind(']');
  if (colon == std::string_view::npos) return host;
  if (bracket != std::string_view::npos && bracket > colon) return host;
  return host.substr(0, colon);
}

std::optional<Response> check_host(const RequestHead& head, const ApiOptions& options) {
  const auto host = head.header("host");
  if (host && host_is_served(*host, options.hosts)) return std::nullopt;
  return problem_response(421, "This service does not answer for the host named in the request.",
                          head.request_id);
}

std::optional<Response> check_origin(const RequestHead& head) {
  const auto origin = head.header("origin");
  if (!origin || !changes_state(head)) return std::nullopt;
  if (is_own_origin(*origin, head.header("host").value_or(""))) return std::nullopt;
  return problem_response(403, "A page of another origin may not change anything here.",
                          head.request_id);
}

std::optional<Response> check_route(const RequestHead& head, const RouteMatch& match) {
  if (match.route) return std::nullopt;
  if (match.allowed.empty()) {
    return problem_response(404, "There is nothing here; \"/\" lists what there is.",
                            head.request_id);
  }
  const std::string allowed = joined(match.allowed);
  Response response = problem_response(
      405, head.method + " is not possible here; allowed: " + allowed, head.request_id);
  response.headers.push_back({"Allow", allowed});
  return response;
}

std::optional<Response> check_query(const RequestHead& head, const Route& route) {
  std::vector<Fault> faults;
  std::vector<std::string_view> seen;
  for (const auto& [name, value] : head.query) {
    const bool known = std::find(route.query.begin(), route.query.end(), name) != route.query.end();
    const bool again = std::find(seen.begin(), seen.end(), name) != seen.end();
    seen.push_back(name);
    if (known && !again) continue;
    const std::string shown = "\"" + name.substr(0, 40) + "\"";
    Fault fault{"", known ? "duplicate_parameter" : "unknown_parameter", "", {}, ""};
    if (known) {
      fault.detail = "the query parameter " + shown + " is given twice";
    } else {
      fault.detail = "unknown query parameter " + shown;
      fault.allowed.assign(route.query.begin(), route.query.end());
      fault.suggestion = nearest_name(name, route.query);
    }
    faults.push_back(std::move(fault));
  }
  if (faults.empty()) return std::nullopt;
  return problem_response(400, "The query of the request cannot be understood.", head.request_id,
                          faults);
}

std::optional<Response> check_content_type(const RequestHead& head, const Route& route) {
  if (route.body == BodyUse::none || head.content_length == 0) {
    if (route.body != BodyUse::required) return std::nullopt;
  }
  const auto encoding = head.header("content-encoding");
  if (encoding && !equal_ignoring_case(trimmed(*encoding), "identity")) {
    return problem_response(415, "A compressed body is not read; send it as it is.",
                            head.request_id);
  }
  const auto type = head.header("content-type");
  if (type && is_json_type(*type)) return std::nullopt;
  Response response = problem_response(
      415, "The body must be JSON in UTF-8, with the Content-Type application/json.",
      head.request_id);
  response.headers.push_back({"Accept-Post", "application/json"});
  return response;
}

std::optional<Response> check_accept(const RequestHead& head, const Route& route) {
  if (const auto format = query_value(head, "format")) {
    const auto& formats = route.formats;
    if (std::find(formats.begin(), formats.end(), *format) == formats.end()) {
      return problem_response(406, "There is no such format; available: " + joined(formats),
                              head.request_id);
    }
    return std::nullopt;  // an explicit format wins over Accept
  }
  if (accepts(head, "application/json")) return std::nullopt;
  return problem_response(406, "The answer is application/json, which Accept does not allow.",
                          head.request_id);
}

std::optional<Response> check_size(const RequestHead& head, const ApiOptions& options) {
  if (head.content_length <= options.max_body_bytes) return std::nullopt;
  return problem_response(413,
                          "The body has " + std::to_string(head.content_length) +
                              " bytes; at most " + std::to_string(options.max_body_bytes) +
                              " are read.",
                          head.request_id);
}

}  // namespace

bool host_is_served(std::string_view host, std::span<const std::string> names) {
  return std::any_of(names.begin(), names.end(), [host](const std::string& name) {
    return equal_ignoring_case(host, name) || equal_ignoring_case(without_port(host), name);
  });
}

bool is_own_origin(std::string_view origin, std::string_view host) {
  for (const auto& [scheme, port] :
       {std::pair<std::string_view, std::string_view>{"http://", ":80"}, {"https://", ":443"}}) {
    if (!origin.starts_with(scheme)) continue;
    const std::string_view authority = origin.substr(scheme.size());
    // An origin leaves its scheme's port out; Host may name it.
    return equal_ignoring_case(authority, host) ||
           equal_ignoring_case(std::string(authority) + std::string(port), host);
  }
  return false;
}

std::optional<std::string_view> query_value(const RequestHead& head, std::string_view name) {
  for (const auto& [key, value] : head.query) {
    if (key == name) return value;
  }
  return std::nullopt;
}

std::optional<Response> check_head(const RequestHead& head, const RouteMatch& match,
                                   const ApiOptions& options) {
  if (auto refusal = check_host(head, options)) return refusal;
  if (auto refusal = check_origin(head)) return refusal;
  if (auto refusal = check_route(head, match)) return refusal;
  if (auto refusal = check_query(head, *match.route)) return refusal;
  if (auto refusal = check_content_type(head, *match.route)) return refusal;
  if (auto refusal = check_accept(head, *match.route)) return refusal;
  return check_size(head, options);
}

}  // namespace bandwright
