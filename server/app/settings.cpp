#include "server/app/settings.h"

#include "server/app/core_count.h"

namespace bandwright {

ServerOptions server_options(const Config& config) {
  using std::chrono::seconds;
  const auto size = [](std::int64_t n) { return static_cast<std::size_t>(n); };
  const auto count = [](std::int64_t n) { return static_cast<int>(n); };
  ServerOptions options;
  if (const auto address = parse_listen(config.listen)) {
    options.address = address->host;
    options.port = address->port;
  }
  options.io_threads = count(config.http_threads);
  options.worker_threads = count(config.http_workers);
  options.head.head_bytes = size(config.max_head_bytes);
  options.head.fields = size(config.max_fields);
  options.head.field_bytes = size(config.max_field_bytes);
  options.head.target_bytes = size(config.max_target_bytes);
  options.head_deadline = seconds(config.head_seconds);
  options.body_deadline = seconds(config.body_seconds);
  options.write_deadline = seconds(config.write_seconds);
  options.idle_deadline = seconds(config.idle_seconds);
  options.requests_per_connection = count(config.requests_per_connection);
  options.connections = count(config.connections);
  options.connections_a_peer = count(config.connections_per_peer);
  return options;
}

JobServiceOptions job_options(const Config& config) {
  JobServiceOptions options;
  options.workers = static_cast<int>(config.workers);
  options.max_attempts = static_cast<int>(config.max_attempts);
  options.queue_per_team = static_cast<int>(config.queue_per_team);
  options.queue_total = static_cast<int>(config.queue_total);
  options.running_per_team = static_cast<int>(config.running_per_team);
  options.results_kept = std::chrono::hours(config.results_kept_hours);
  options.min_free_bytes = static_cast<std::uint64_t>(config.min_free_mib) << 20;
  return options;
}

ApiOptions api_options(const Config& config) {
  ApiOptions options;
  options.max_body_bytes = static_cast<std::uint64_t>(config.max_body_bytes);
  options.hosts = split_list(config.hosts);
  options.analysis_threads = 1;
  return options;
}

}  // namespace bandwright
