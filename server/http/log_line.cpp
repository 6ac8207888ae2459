#include "server/http/log_line.h"

#include <spdlog/logger.h>
#include <spdlog/sinks/stdout_sinks.h>

#include <array>
#include <cstdio>

namespace bandwright {
namespace {

// Bytes above 127 may be part of anything a client sent, so they are escaped as Latin-1: the line
// stays valid JSON and every byte stays readable.
void append_escaped(std::string& text, std::string_view value) {
  text += '"';
  for (const char c : value) {
    const auto byte = static_cast<unsigned char>(c);
    if (c == '"' || c == '\\') {
      text.append(1, '\\').append(1, c);
    } else if (byte < 0x20 || byte >= 0x7f) {
      std::array<char, 8> escape{};
      std::snprintf(escape.data(), escape.size(), "\\u%04x", byte);
      text += escape.data();
    } else {
      text += c;
    }
  }
  text += '"';
}

}  // namespace

void LogLine::add_key(std::string_view key) {
  if (!text_.empty()) text_ += ',';
  append_escaped(text_, key);
  text_ += ':';
}

LogLine& LogLine::add(std::string_view key, std::string_view value) {
  add_key(key);
  append_escaped(text_, value);
  return *this;
}

LogLine& LogLine::add(std::string_view key, std::int64_t value) {
  add_key(key);
  text_ += std::to_string(value);
  return *this;
}

std::shared_ptr<spdlog::logger> make_json_logger(const std::string& level) {
  auto sink = std::make_shared<spdlog::sinks::stderr_sink_mt>();
  auto logger = std::make_shared<spdlog::logger>("bandwright", std::move(sink));
  logger->set_pattern(R"({"time":"%Y-%m-%dT%H:%M:%S.%eZ","level":"%l",%v})",
                      spdlog::pattern_time_type::utc);
  logger->set_level(spdlog::level::from_str(level));
  logger->flush_on(spdlog::level::info);
  return logger;
}

}  // namespace bandwright
