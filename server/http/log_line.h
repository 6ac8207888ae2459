// One log record as the members of a JSON object, in the order they were added.
//
// The logger's pattern puts time and level in front and the braces around it (make_json_logger),
// so that a line is one object: {"time":"...","level":"info","msg":"listening","port":8080}.
#pragma once

#include <cstdint>
#include <memory>
#include <string>
#include <string_view>

namespace spdlog {
class logger;
}

namespace bandwright {

class LogLine {
 public:
  explicit LogLine(std::string_view message) { add("msg", message); }

  LogLine& add(std::string_view key, std::string_view value);
  LogLine& add(std::string_view key, std::int64_t value);

  const std::string& text() const { return text_; }

 private:
  void add_key(std::string_view key);

  std::string text_;
};

// A logger that writes JSON lines to standard error, from any thread.
// `level` is one of debug, info, warning, error, off.
std::shared_ptr<spdlog::logger> make_json_logger(const std::string& level);

}  // namespace bandwright
