// How this daemon is set up: every option, read from four places, checked as a whole.
//
// The options live in one table (option_table.cpp); the flags, the environment, the file, the help
// text and the defaults all come from it. A flag beats the environment, which beats the file.
#pragma once

#include <cstdint>
#include <map>
#include <string>
#include <utility>
#include <vector>

#include "solver/base/result.h"

namespace bandwright {

// Filled from the table: no defaults here.
struct Config {
  std::string listen;
  std::string data;
  std::string hosts;
  std::string log_level;
  std::int64_t threads = 0;
  std::int64_t workers = 0;
  std::int64_t http_threads = 0;
  std::int64_t http_workers = 0;
  std::int64_t max_head_bytes = 0;
  std::int64_t max_fields = 0;
  std::int64_t max_field_bytes = 0;
  std::int64_t max_target_bytes = 0;
  std::int64_t max_body_bytes = 0;
  std::int64_t head_seconds = 0;
  std::int64_t body_seconds = 0;
  std::int64_t write_seconds = 0;
  std::int64_t idle_seconds = 0;
  std::int64_t requests_per_connection = 0;
  std::int64_t connections = 0;
  std::int64_t connections_per_peer = 0;
  std::int64_t queue_total = 0;
  std::int64_t queue_per_team = 0;
  std::int64_t running_per_team = 0;
  std::int64_t max_attempts = 0;
  std::int64_t results_kept_hours = 0;
  std::int64_t min_free_mib = 0;
  std::int64_t shutdown_seconds = 0;
};

// Settings as text, by option key.
using Settings = std::map<std::string, std::string>;

struct ConfigSources {
  Settings flags;
  std::vector<std::pair<std::string, std::string>> environment;  // all of it, names as they are
  std::string file_name;                                         // for messages
  std::string file_text;                                         // "" without a file
};

struct LoadedConfig {
  Config config;
  std::vector<std::string> warnings;
};

// The configuration, or everything that is wrong with it.
Result<LoadedConfig, std::vector<std::string>> load_config(const ConfigSources& sources);

struct ListenAddress {
  std::string host;  // an IP address, without brackets
  std::uint16_t port = 0;
};

// "127.0.0.1:8080", "[::1]:0", "localhost:80"; or why not. Only loopback is accepted.
Result<ListenAddress, std::string> parse_listen(const std::string& text);

// "a, b" as {"a", "b"}.
std::vector<std::string> split_list(const std::string& text);

}  // namespace bandwright
