#include "server/config/config.h"

#include <doctest/doctest.h>

#include <algorithm>
#include <set>
#include <string>

#include "server/config/option_table.h"

namespace bandwright {
namespace {

ConfigSources minimal() {
  ConfigSources sources;
  sources.flags["data"] = "jobs";
  return sources;
}

Config loaded(const ConfigSources& sources) {
  const auto result = load_config(sources);
  REQUIRE_MESSAGE(result.ok(), (result.ok() ? "" : result.error().front()));
  return result->config;
}

std::vector<std::string> errors_of(const ConfigSources& sources) {
  const auto result = load_config(sources);
  REQUIRE_FALSE(result.ok());
  return result.error();
}

TEST_CASE("every row of the option table is complete and its default passes its own check") {
  std::set<std::string_view> keys;
  for (const Option& option : option_table()) {
    CAPTURE(option.key);
    CHECK(keys.insert(option.key).second);
    CHECK(option.key.find_first_not_of("abcdefghijklmnopqrstuvwxyz-") == std::string_view::npos);
    CHECK_FALSE(option.sentence.empty());
    CHECK(option_help(option).find(environment_name(option)) != std::string::npos);
  }
  const Config config = loaded(minimal());
  CHECK(config.listen == "127.0.0.1:8080");
  CHECK(config.max_body_bytes == 1 << 20);
  CHECK(config.workers == 1);
}

TEST_CASE("each number is accepted at both ends of its range and refused beyond") {
  for (const Option& option : option_table()) {
    const auto* member = std::get_if<std::int64_t Config::*>(&option.member);
    if (member == nullptr) continue;
    CAPTURE(option.key);
    ConfigSources sources = minimal();
    std::string& value = sources.flags[std::string(option.key)];
    for (const std::int64_t end : {option.least, option.most}) {
      value = std::to_string(end);
      CHECK(loaded(sources).**member == end);
    }
    for (const std::int64_t beyond : {option.least - 1, option.most + 1}) {
      value = std::to_string(beyond);
      CHECK(errors_of(sources).size() == 1);
    }
  }
}

TEST_CASE("a flag beats the environment, which beats the file") {
  ConfigSources sources = minimal();
  sources.file_text = "workers = 2\nthreads = 2\nqueue-total=2\n";
  sources.environment = {{"BANDWRIGHT_WORKERS", "3"}, {"BANDWRIGHT_THREADS", "3"}};
  sources.flags["workers"] = "4";
  const Config config = loaded(sources);
  CHECK(config.workers == 4);
  CHECK(config.threads == 3);
  CHECK(config.queue_total == 2);
}

TEST_CASE("the file takes comments, blank lines and loose spacing") {
  ConfigSources sources = minimal();
  sources.file_text = "# set up\n\n  listen =  [::1]:80 \r\n\thosts=a , b\n";
  const Config config = loaded(sources);
  CHECK(config.listen == "[::1]:80");
  CHECK(split_list(config.hosts) == std::vector<std::string>{"a", "b"});
}

TEST_CASE("all faults are told at once, each with its place") {
  ConfigSources sources;
  sources.file_name = "bw.conf";
  sources.file_text = "worker = 2\nno equals sign\nthreads = many\nthreads = 2\n";
  sources.environment = {{"BANDWRIGHT_LOG_LEVEL", "loud"}};
  sources.flags["listen"] = "0.0.0.0:80";
  sources.flags["max-fields"] = "12x";
  std::string all;
  for (const std::string& error : errors_of(sources)) all += error + "\n";
  CAPTURE(all);
  for (const char* part :
       {"bw.conf:1: there is no option 'worker'", "bw.conf:2: expected", "bw.conf:3: 'many'",
        "bw.conf:4: threads is set a second time", "BANDWRIGHT_LOG_LEVEL: 'loud'",
        "--max-fields: '12x'", "listen: 0.0.0.0 can be reached", "data: name the folder"}) {
    CAPTURE(part);
    CHECK(all.find(part) != std::string::npos);
  }
}

TEST_CASE("an unknown name under the prefix in the environment is a warning, no error") {
  ConfigSources sources = minimal();
  sources.environment = {{"BANDWRIGHT_PORT", "tcp://10.0.0.1:80"}, {"HOME", "/"}};
  const auto result = load_config(sources);
  REQUIRE(result.ok());
  REQUIRE(result->warnings.size() == 1);
  CHECK(result->warnings[0].find("BANDWRIGHT_PORT") != std::string::npos);
}

TEST_CASE("only loopback addresses are served") {
  for (const char* text : {"127.0.0.1:0", "127.1.2.3:80", "[::1]:65535", "localhost:8080"}) {
    CAPTURE(text);
    CHECK(parse_listen(text).ok());
  }
  for (const char* text : {"0.0.0.0:80", "192.168.0.1:80", "[::]:80", "[::ffff:127.0.0.1]:80",
                           "127.0.0.1", "127.0.0.1:", "127.0.0.1:65536", "127.0.0.1:-1", ":80",
                           "::1:80", "example.org:80", "127.0.0.1:80x", ""}) {
    CAPTURE(text);
    CHECK_FALSE(parse_listen(text).ok());
  }
  CHECK(parse_listen("localhost:80")->host == "127.0.0.1");
  CHECK(parse_listen("[::1]:81")->host == "::1");
  CHECK(parse_listen("[::1]:81")->port == 81);
}

}  // namespace
}  // namespace bandwright
