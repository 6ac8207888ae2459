// What the head of a request alone decides, before a byte of the body is read.
//
// Order: Host (421), Origin of a state change (403), path and method (404, 405), query (400),
// Content-Type (415), Accept and format (406), size (413).
#pragma once

#include <optional>
#include <span>
#include <string_view>

#include "server/api/routes.h"

namespace bandwright {

// The refusal, or nothing if the request may go on. Pure.
std::optional<Response> check_head(const RequestHead& head, const RouteMatch& match,
                                   const ApiOptions& options);

// Whether `host`, a Host field with or without port, is one of `names`.
bool host_is_served(std::string_view host, std::span<const std::string> names);

// Whether `origin` is the page of the same host and port as `host`.
bool is_own_origin(std::string_view origin, std::string_view host);

// The value of the query parameter `name`, if given.
std::optional<std::string_view> query_value(const RequestHead& head, std::string_view name);

}  // namespace bandwright
