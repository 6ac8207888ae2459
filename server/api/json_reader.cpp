#include "server/api/json_reader.h"

#include <cmath>
#include <optional>
#include <semaphore>
#include <string>
#include <vector>

#include "server/api/limits.h"

namespace bandwright {
namespace {

std::counting_semaphore<limits::kJsonParsesAtOnce> parse_slots(limits::kJsonParsesAtOnce);

struct ParseSlot {
  ParseSlot() { parse_slots.acquire(); }
  ~ParseSlot() { parse_slots.release(); }
  ParseSlot(const ParseSlot&) = delete;
  ParseSlot& operator=(const ParseSlot&) = delete;
};

// "line 3, column 7" of the byte before `offset`, both counted from 1.
std::string position_text(std::string_view text, std::size_t offset) {
  const std::size_t at = std::min(offset == 0 ? 0 : offset - 1, text.size());
  std::size_t line = 1;
  std::size_t column = 1;
  for (std::size_t i = 0; i < at; ++i) {
    ++column;
    if (text[i] == '\n') {
      ++line;
      column = 1;
    }
  }
  return "line " + std::to_string(line) + ", column " + std::to_string(column);
}

// Receives the parser's events; every member returns false to end the reading.
class Builder {
 public:
  using number_integer_t = Json::number_integer_t;
  using number_unsigned_t = Json::number_unsigned_t;
  using number_float_t = Json::number_float_t;
  using string_t = Json::string_t;
  using binary_t = Json::binary_t;

  explicit Builder(std::string_view text) : text_(text) {}

  bool null() { return place(nullptr); }
  bool boolean(bool value) { return place(value); }
  bool number_integer(number_integer_t value) { return place(value); }
  bool number_unsigned(number_unsigned_t value) { return place(value); }
  bool number_float(number_float_t value, const string_t&) {
    constexpr double kExact = 9007199254740992.0;  // 2^53: whole numbers below are exact
    if (value == std::floor(value) && std::fabs(value) < kExact) {
      return value < 0 ? place(static_cast<number_integer_t>(value))
                       : place(static_cast<number_unsigned_t>(value));
    }
    return place(value);
  }
  bool string(string_t& value) {
    const bool touchstone =
        !open_.empty() && open_.back().value->is_object() && open_.back().key == "touchstone";
    const std::size_t most = touchstone ? limits::kTouchstoneBytes : limits::kStringBytes;
    if (value.size() > most) {
      return refuse("string_too_long", "a string of " + std::to_string(value.size()) +
                                           " bytes; at most " + std::to_string(most) +
                                           " are allowed here");
    }
    return place(std::move(value));
  }
  bool binary(binary_t&) { return false; }

  bool start_object(std::size_t) { return open(Json::object()); }
  bool key(string_t& name) {
    if (name.size() > limits::kStringBytes) {
      return refuse("string_too_long", "a member name of " + std::to_string(name.size()) +
                                           " bytes; at most " +
                                           std::to_string(limits::kStringBytes) + " are allowed");
    }
    Level& level = open_.back();
    level.key = std::move(name);
    if (level.value->contains(level.key)) {
      const std::string shown = level.key.substr(0, 60);
      return refuse("duplicate_member", "the member \"" + shown + "\" is given twice");
    }
    return true;
  }
  bool end_object() { return close(); }
  bool start_array(std::size_t) { return open(Json::array()); }
  bool end_array() { return close(); }

  template <class Error>
  bool parse_error(std::size_t offset, const std::string& token, const Error& error) {
    constexpr int kNumberTooLarge = 406;  // the library's code for a number beyond double
    if (error.id == kNumberTooLarge) {
      return refuse("number_too_large", "the number " + token.substr(0, 40) +
                                            " is larger than any that can be computed with");
    }
    const bool ended = offset > text_.size();
    fault_ = Fault{"#",
                   "not_json",
                   (ended ? "the text ends before the JSON document does"
                          : "not JSON at " + position_text(text_, offset)),
                   {},
                   ""};
    return false;
  }

  Result<Json, Fault> finish(bool complete) && {
    if (fault_) return std::move(*fault_);
    if (!complete) return Fault{"#", "not_json", "the text is not a JSON document", {}, ""};
    return std::move(root_);
  }

 private:
  // An array or object whose end has not been read. Pointers stay valid: a container's children
  // move only when it grows, and it cannot grow while one of them is open.
  struct Level {
    Json* value;
    std::string key;  // of the member being read, for objects
  };

  std::string here() const {
    std::string pointer = "#";
    for (std::size_t i = 0; i < open_.size(); ++i) {
      const Level& level = open_[i];
      if (level.value->is_object()) {
        pointer = pointer_child(pointer, level.key);
      } else {
        // The child being read is the last one if it is open itself, else the next.
        const std::size_t size = level.value->size();
        pointer = pointer_child(pointer, i + 1 < open_.size() ? size - 1 : size);
      }
    }
    return pointer;
  }

  bool refuse(std::string code, std::string detail) {
    fault_ = Fault{here(), std::move(code), std::move(detail), {}, ""};
    return false;
  }

  Json* add(Json&& value) {
    if (open_.empty()) return &(root_ = std::move(value));
    Level& level = open_.back();
    if (level.value->is_array()) return &level.value->emplace_back(std::move(value));
    return &((*level.value)[level.key] = std::move(value));
  }

  bool count() {
    if (++values_ <= limits::kJsonValues) return true;
    return refuse("too_many_values",
                  "more than " + std::to_string(limits::kJsonValues) + " values in one document");
  }

  template <class Value>
  bool place(Value&& value) {
    if (!count()) return false;
    add(Json(std::forward<Value>(value)));
    return true;
  }

  bool open(Json&& container) {
    if (!count()) return false;
    if (open_.size() >= static_cast<std::size_t>(limits::kJsonDepth)) {
      return refuse("too_deep", "nested deeper than " + std::to_string(limits::kJsonDepth) +
                                    " arrays and objects");
    }
    open_.push_back({add(std::move(container)), ""});
    return true;
  }

  bool close() {
    open_.pop_back();
    return true;
  }

  std::string_view text_;
  Json root_;
  std::vector<Level> open_;
  std::size_t values_ = 0;
  std::optional<Fault> fault_;
};

}  // namespace

Result<Json, Fault> read_json(std::string_view text) {
  if (text.empty()) {
    return Fault{"#", "not_json", "the body is empty; a JSON document is expected", {}, ""};
  }
  // The library takes a NUL for the end of the text and would ignore what follows.
  if (const std::size_t nul = text.find('\0'); nul != std::string_view::npos) {
    return Fault{"#", "not_json", "a NUL byte at " + position_text(text, nul + 1), {}, ""};
  }
  const ParseSlot slot;
  Builder builder(text);
  const bool complete = Json::sax_parse(text.begin(), text.end(), &builder);
  return std::move(builder).finish(complete);
}

}  // namespace bandwright
