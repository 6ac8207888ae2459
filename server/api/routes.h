// The table of routes: what is served, by which method, with what in and what out.
//
// The dispatcher, 404 and 405 with Allow, the links at "/" and the tests all read this one table.
#pragma once

#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "server/api/api.h"

namespace bandwright {

struct ApiContext {
  JobService& jobs;
  const ApiOptions& options;
};

// One request on its way to its handler.
struct Call {
  Request request;
  std::vector<std::string> parameters;  // what the pattern's {...} stood for, in order
};

using RouteHandler = void (*)(const ApiContext& context, const Call& call, const Respond& respond);

enum class BodyUse { none, optional, required };

struct Route {
  std::string_view method;
  std::string_view pattern;  // "/v1/jobs/{id}/stop"
  std::string_view summary;
  BodyUse body = BodyUse::none;
  std::vector<std::string_view> query;    // names of the query parameters
  std::vector<std::string_view> formats;  // values of ?format=, where there is one
  RouteHandler handle = nullptr;
};

std::span<const Route> route_table();

struct RouteMatch {
  const Route* route = nullptr;  // nothing: see `allowed`
  std::vector<std::string> parameters;
  std::vector<std::string_view> allowed;  // the methods of the path; empty: no such path
};

RouteMatch match_route(std::string_view method, std::string_view path);

}  // namespace bandwright
