#include "server/api/routes.h"

#include <algorithm>
#include <optional>

#include "server/api/analysis_handler.h"
#include "server/api/design_handlers.h"
#include "server/api/job_handlers.h"
#include "server/api/service_handlers.h"

namespace bandwright {
namespace {

std::vector<Route> make_table() {
  using enum BodyUse;
  return {
      {"GET", "/", "What is served here", none, {}, {}, show_root},
      {"GET", "/livez", "Whether the process lives", none, {}, {}, show_liveness},
      {"GET", "/readyz", "Whether jobs are taken", none, {}, {}, show_readiness},
      {"GET", "/openapi.json", "This interface as OpenAPI", none, {}, {}, show_openapi},
      {"GET", "/v1/service", "Version, limits, kinds, formats", none, {}, {}, show_service},
      {"POST", "/v1/jobs", "Create a job", required, {}, {}, create_job},
      {"GET",
       "/v1/jobs",
       "List jobs, newest first",
       none,
       {"state", "page_size", "page_token"},
       {},
       list_jobs},
      {"GET", "/v1/jobs/{id}", "Read a job", none, {}, {}, show_job},
      {"DELETE", "/v1/jobs/{id}", "Remove a job that has ended", none, {}, {}, delete_job},
      {"POST", "/v1/jobs/{id}/stop", "Finish now with the best so far", optional, {}, {}, stop_job},
      {"POST", "/v1/jobs/{id}/cancel", "End a job without a result", optional, {}, {}, cancel_job},
      {"GET",
       "/v1/jobs/{id}/designs",
       "One row a design",
       none,
       {"format"},
       {"json"},
       show_designs},
      {"GET",
       "/v1/jobs/{id}/designs/{rank}",
       "One design in full",
       none,
       {"format"},
       {"json"},
       show_design},
      {"POST", "/v1/analyses", "Analyse a given network", required, {}, {}, analyse_network},
  };
}

std::vector<std::string_view> segments(std::string_view path) {
  std::vector<std::string_view> out;
  std::size_t begin = 1;
  while (begin <= path.size()) {
    const std::size_t end = std::min(path.find('/', begin), path.size());
    out.push_back(path.substr(begin, end - begin));
    begin = end + 1;
  }
  return out;
}

// What the pattern's parameters stand for in `path`; nothing if the path is another.
std::optional<std::vector<std::string>> match_pattern(std::string_view pattern,
                                                      std::string_view path) {
  if (!path.starts_with('/')) return std::nullopt;
  const auto wanted = segments(pattern);
  const auto given = segments(path);
  if (wanted.size() != given.size()) return std::nullopt;
  std::vector<std::string> parameters;
  for (std::size_t i = 0; i < wanted.size(); ++i) {
    const bool open = wanted[i].starts_with('{');
    if (open && !given[i].empty()) {
      parameters.emplace_back(given[i]);
    } else if (wanted[i] != given[i]) {
      return std::nullopt;
    }
  }
  return parameters;
}

}  // namespace

std::span<const Route> route_table() {
  static const std::vector<Route> table = make_table();
  return table;
}

RouteMatch match_route(std::string_view method, std::string_view path) {
  RouteMatch match;
  for (const Route& route : route_table()) {
    auto parameters = match_pattern(route.pattern, path);
    if (!parameters) continue;
    match.allowed.push_back(route.method);
    if (route.method != method) continue;
    match.route = &route;
    match.parameters = std::move(*parameters);
  }
  return match;
}

}  // namespace bandwright
