#include "server/config/option_table.h"

#include <array>

namespace bandwright {
namespace {

constexpr std::int64_t kDay = 86'400;

Option number(std::string_view key, std::int64_t Config::*member, std::string_view default_value,
              std::int64_t least, std::int64_t most, std::string_view unit,
              std::string_view sentence) {
  return {key, member, default_value, least, most, "", unit, sentence};
}

Option text(std::string_view key, std::string Config::*member, std::string_view default_value,
            std::string_view choices, std::string_view sentence) {
  return {key, member, default_value, 0, 0, choices, "", sentence};
}

const std::array kOptions = {
    text("listen", &Config::listen, "127.0.0.1:8080", "",
         "Loopback address and port to serve on; port 0 takes any free one"),
    text("data", &Config::data, "", "", "Folder for jobs and results; made if missing; needed"),
    text("hosts", &Config::hosts, "127.0.0.1, localhost, [::1]", "",
         "Host names that are answered, separated by commas"),
    text("log-level", &Config::log_level, "info", "debug info warning error off",
         "Least severe log lines written to standard error"),
    number("threads", &Config::threads, "0", 0, 1024, "threads",
           "Solver threads of one job; 0 is one a core"),
    number("workers", &Config::workers, "1", 1, 256, "jobs", "Jobs that run at the same time"),
    number("http-threads", &Config::http_threads, "2", 1, 64, "threads", "Threads that move bytes"),
    number("http-workers", &Config::http_workers, "4", 1, 256, "threads",
           "Threads that answer requests"),
    number("max-head-bytes", &Config::max_head_bytes, "16384", 1024, 1 << 20, "bytes",
           "Longest request head"),
    number("max-fields", &Config::max_fields, "64", 8, 1024, "fields",
           "Most header fields in a request"),
    number("max-field-bytes", &Config::max_field_bytes, "8192", 256, 1 << 20, "bytes",
           "Longest header field"),
    number("max-target-bytes", &Config::max_target_bytes, "2048", 256, 1 << 16, "bytes",
           "Longest request target"),
    number("max-body-bytes", &Config::max_body_bytes, "1048576", 1024, 1 << 26, "bytes",
           "Longest request body"),
    number("head-seconds", &Config::head_seconds, "10", 1, 3600, "seconds",
           "Time for a request head to arrive"),
    number("body-seconds", &Config::body_seconds, "30", 1, 3600, "seconds",
           "Time for a request body to arrive"),
    number("write-seconds", &Config::write_seconds, "30", 1, 3600, "seconds",
           "Time for a response to be taken"),
    number("idle-seconds", &Config::idle_seconds, "15", 1, 3600, "seconds",
           "Time a connection may stay open between requests"),
    number("requests-per-connection", &Config::requests_per_connection, "1000", 1, 1'000'000,
           "requests", "Requests after which a connection is closed"),
    number("connections", &Config::connections, "256", 1, 10'000, "connections",
           "Connections at the same time"),
    number("connections-per-peer", &Config::connections_per_peer, "64", 1, 10'000, "connections",
           "Connections at the same time from one address"),
    number("queue-total", &Config::queue_total, "1000", 1, 100'000, "jobs", "Jobs that may wait"),
    number("queue-per-team", &Config::queue_per_team, "100", 1, 100'000, "jobs",
           "Jobs of one team that may wait"),
    number("running-per-team", &Config::running_per_team, "2", 1, 256, "jobs",
           "Jobs of one team that run at the same time"),
    number("max-attempts", &Config::max_attempts, "3", 1, 100, "attempts",
           "Times a job is started before a crash counts as its fault"),
    number("results-kept-hours", &Config::results_kept_hours, "168", 1, 87'600, "hours",
           "Time from the end of a job to its removal"),
    number("min-free-mib", &Config::min_free_mib, "256", 1, 1 << 20, "MiB",
           "Free disk space below which no job is taken"),
    number("shutdown-seconds", &Config::shutdown_seconds, "20", 0, kDay, "seconds",
           "Time running jobs get to end after SIGTERM before they are queued again"),
};

std::string range_of(const Option& option) {
  if (std::holds_alternative<std::int64_t Config::*>(option.member)) {
    return std::string(option.unit) + ", " + std::to_string(option.least) + " to " +
           std::to_string(option.most) + ", ";
  }
  return option.choices.empty() ? "" : "one of " + std::string(option.choices) + ", ";
}

}  // namespace

std::span<const Option> option_table() {
  return kOptions;
}

std::string environment_name(const Option& option) {
  std::string name = "BANDWRIGHT_";
  for (const char c : option.key) name += c == '-' ? '_' : static_cast<char>(c - 'a' + 'A');
  return name;
}

std::string option_help(const Option& option) {
  std::string help = std::string(option.sentence) + " (" + range_of(option);
  if (!option.default_value.empty()) help += "default " + std::string(option.default_value) + ", ";
  return help + environment_name(option) + ")";
}

}  // namespace bandwright
