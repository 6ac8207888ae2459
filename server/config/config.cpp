#include "server/config/config.h"

#include <arpa/inet.h>

#include <algorithm>
#include <charconv>
#include <optional>
#include <sstream>
#include <string_view>

#include "server/config/option_table.h"

namespace bandwright {
namespace {

constexpr std::string_view kEnvironmentPrefix = "BANDWRIGHT_";

// A setting with the place it came from, for messages.
struct Setting {
  std::string value;
  std::string place;
};
using Chosen = std::map<std::string, Setting>;

std::string trim(std::string_view text) {
  const std::size_t first = text.find_first_not_of(" \t\r");
  if (first == std::string_view::npos) return {};
  return std::string(text.substr(first, text.find_last_not_of(" \t\r") - first + 1));
}

const Option* find_option(std::string_view key) {
  for (const Option& option : option_table()) {
    if (option.key == key) return &option;
  }
  return nullptr;
}

// `key = value` lines; '#' begins a comment line.
void read_file(const ConfigSources& sources, Chosen& chosen, std::vector<std::string>& errors) {
  std::istringstream lines(sources.file_text);
  std::string line;
  Chosen in_file;
  for (int number = 1; std::getline(lines, line); ++number) {
    const std::string place = sources.file_name + ":" + std::to_string(number);
    line = trim(line);
    if (line.empty() || line.front() == '#') continue;
    const std::size_t equals = line.find('=');
    const std::string key = trim(std::string_view(line).substr(0, equals));
    if (equals == std::string::npos) {
      errors.push_back(place + ": expected a line of the form: key = value");
    } else if (find_option(key) == nullptr) {
      errors.push_back(place + ": there is no option '" + key + "'; --help lists them");
    } else if (!in_file.insert({key, {trim(std::string_view(line).substr(equals + 1)), place}})
                    .second) {
      errors.push_back(place + ": " + key + " is set a second time");
    }
  }
  for (auto& [key, setting] : in_file) chosen[key] = setting;
}

// An unknown name is a warning only: orchestrators put names of their own under a service's prefix.
void read_environment(const ConfigSources& sources, Chosen& chosen,
                      std::vector<std::string>& warnings) {
  for (const auto& [name, value] : sources.environment) {
    if (name.compare(0, kEnvironmentPrefix.size(), kEnvironmentPrefix) != 0) continue;
    const auto table = option_table();
    const auto found = std::find_if(table.begin(), table.end(), [&name = name](const Option& o) {
      return environment_name(o) == name;
    });
    if (found == table.end()) {
      warnings.push_back(name + " is set in the environment, but is no option");
    } else {
      chosen[std::string(found->key)] = {value, name};
    }
  }
}

std::optional<std::string> apply_number(const Option& option, const std::string& value,
                                        std::int64_t& number) {
  const char* end = value.data() + value.size();
  const auto read = std::from_chars(value.data(), end, number);
  const bool whole = !value.empty() && read.ec == std::errc() && read.ptr == end;
  if (whole && number >= option.least && number <= option.most) return std::nullopt;
  return "'" + value + "' is not a whole number of " + std::string(option.unit) + " from " +
         std::to_string(option.least) + " to " + std::to_string(option.most);
}

std::optional<std::string> apply_text(const Option& option, const std::string& value,
                                      std::string& text) {
  text = value;
  std::istringstream choices{std::string(option.choices)};
  if (option.choices.empty()) return std::nullopt;
  for (std::string choice; choices >> choice;) {
    if (choice == value) return std::nullopt;
  }
  return "'" + value + "' is not one of: " + std::string(option.choices);
}

std::optional<std::string> apply(const Option& option, const std::string& value, Config& config) {
  if (const auto* number = std::get_if<std::int64_t Config::*>(&option.member)) {
    return apply_number(option, value, config.**number);
  }
  return apply_text(option, value, config.*std::get<std::string Config::*>(option.member));
}

// What no single option can tell.
void check_whole(const Config& config, std::vector<std::string>& errors) {
  if (config.data.empty()) errors.push_back("data: name the folder for jobs and results");
  const auto listen = parse_listen(config.listen);
  if (!listen) errors.push_back("listen: " + listen.error());
  if (split_list(config.hosts).empty()) errors.push_back("hosts: name at least one");
}

std::optional<std::uint16_t> parse_port(std::string_view text) {
  std::uint16_t port = 0;
  const auto read = std::from_chars(text.data(), text.data() + text.size(), port);
  if (text.empty() || read.ec != std::errc() || read.ptr != text.data() + text.size()) {
    return std::nullopt;
  }
  return port;
}

}  // namespace

Result<LoadedConfig, std::vector<std::string>> load_config(const ConfigSources& sources) {
  LoadedConfig loaded;
  std::vector<std::string> errors;
  Chosen chosen;
  read_file(sources, chosen, errors);
  read_environment(sources, chosen, loaded.warnings);
  for (const auto& [key, value] : sources.flags) chosen[key] = {value, "--" + key};

  for (const Option& option : option_table()) {
    const auto found = chosen.find(std::string(option.key));
    const bool set = found != chosen.end();
    const std::string value = set ? found->second.value : std::string(option.default_value);
    const auto error = apply(option, value, loaded.config);
    if (error)
      errors.push_back((set ? found->second.place : std::string(option.key)) + ": " + *error);
  }
  check_whole(loaded.config, errors);
  if (!errors.empty()) return errors;
  return loaded;
}

Result<ListenAddress, std::string> parse_listen(const std::string& text) {
  const std::size_t colon = text.rfind(':');
  const auto port = colon == std::string::npos
                        ? std::nullopt
                        : parse_port(std::string_view(text).substr(colon + 1));
  if (!port) {
    return "'" + text + "' is not ADDRESS:PORT, such as 127.0.0.1:8080 or [::1]:8080";
  }
  std::string host = text.substr(0, colon);
  if (host == "localhost") host = "127.0.0.1";
  const bool bracketed = host.size() > 2 && host.front() == '[' && host.back() == ']';
  if (bracketed) host = host.substr(1, host.size() - 2);

  in_addr four{};
  in6_addr six{};
  const bool is_four = !bracketed && inet_pton(AF_INET, host.c_str(), &four) == 1;
  const bool is_six = bracketed && inet_pton(AF_INET6, host.c_str(), &six) == 1;
  if (!is_four && !is_six) {
    return "'" + host + "' is not an IP address (write IPv6 in brackets)";
  }
  const bool loopback =
      is_four ? (ntohl(four.s_addr) >> 24) == 127 : IN6_IS_ADDR_LOOPBACK(&six) != 0;
  if (!loopback) {
    return host +
           " can be reached from other machines, and callers cannot be told apart: there is no"
           " token support. Use 127.0.0.1 or [::1]";
  }
  return ListenAddress{host, *port};
}

std::vector<std::string> split_list(const std::string& text) {
  std::vector<std::string> parts;
  std::istringstream rest(text);
  for (std::string part; std::getline(rest, part, ',');) {
    part = trim(part);
    if (!part.empty()) parts.push_back(part);
  }
  return parts;
}

}  // namespace bandwright
