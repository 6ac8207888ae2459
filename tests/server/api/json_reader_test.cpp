#include "server/api/json_reader.h"

#include <doctest/doctest.h>

#include <filesystem>
#include <fstream>
#include <iterator>
#include <string>

#include "server/api/decode_request.h"
#include "server/api/limits.h"

namespace bandwright {
namespace {

std::string nested(int depth) {
  return std::string(static_cast<std::size_t>(depth), '[') +
         std::string(static_cast<std::size_t>(depth), ']');
}

std::string code_of(std::string_view text) {
  const auto read = read_json(text);
  return read ? "" : read.error().code;
}

std::string array_of(std::size_t values) {
  std::string text = "[";
  for (std::size_t i = 0; i < values; ++i) text += i == 0 ? "0" : ",0";
  return text + "]";
}

std::string string_member(const std::string& name, std::size_t bytes) {
  return "{\"" + name + "\":\"" + std::string(bytes, 'x') + "\"}";
}

TEST_CASE("a document is read with its values in place") {
  const auto read = read_json(R"( {"a": [1, -2, 2.5, "x", true, null, {"b": {}}]} )");
  REQUIRE(read.ok());
  CHECK(json_text(*read) == R"({"a":[1,-2,2.5,"x",true,null,{"b":{}}]})");
}

TEST_CASE("1, 1.0 and 1e0 are one value, so that equal requests have equal text") {
  const auto read = read_json("[1, 1.0, 1e0, -3.0, 1.5e8, 0.1]");
  REQUIRE(read.ok());
  CHECK(json_text(*read) == "[1,1,1,-3,150000000,0.1]");
}

TEST_CASE("depth 32 is read and depth 33 is refused") {
  CHECK(code_of(nested(limits::kJsonDepth)) == "");
  CHECK(code_of(nested(limits::kJsonDepth + 1)) == "too_deep");
  CHECK(code_of(std::string(1'000'000, '[')) == "too_deep");
}

TEST_CASE("100,000 values are read and one more is refused") {
  CHECK(code_of(array_of(limits::kJsonValues - 1)) == "");  // the array counts too
  CHECK(code_of(array_of(limits::kJsonValues)) == "too_many_values");
}

TEST_CASE("a member given twice is refused by name and place") {
  const auto read = read_json(R"({"goals": [{}, {"to_hz": 1, "to_hz": 2}]})");
  REQUIRE_FALSE(read.ok());
  CHECK(read.error().code == "duplicate_member");
  CHECK(read.error().pointer == "#/goals/1/to_hz");
  CHECK(read.error().detail.find("to_hz") != std::string::npos);
}

TEST_CASE("a number no double can hold is refused at its place") {
  const auto read = read_json(R"({"a": [1, 1e999]})");
  REQUIRE_FALSE(read.ok());
  CHECK(read.error().code == "number_too_large");
  CHECK(read.error().pointer == "#/a/1");
}

TEST_CASE("only a member called touchstone may hold more than 64 KiB") {
  CHECK(code_of(string_member("name", limits::kStringBytes)) == "");
  CHECK(code_of(string_member("name", limits::kStringBytes + 1)) == "string_too_long");
  CHECK(code_of(string_member("touchstone", limits::kTouchstoneBytes)) == "");
  CHECK(code_of(string_member("touchstone", limits::kTouchstoneBytes + 1)) == "string_too_long");
}

TEST_CASE("trailing bytes, NUL, bad UTF-8, NaN and nothing at all are refused") {
  CHECK(code_of("{} x") == "not_json");
  CHECK(code_of(std::string_view("{}\0", 3)) == "not_json");
  CHECK(code_of("\"\xff\"") == "not_json");
  CHECK(code_of("[NaN]") == "not_json");
  CHECK(code_of("[Infinity]") == "not_json");
  CHECK(code_of("") == "not_json");
}

TEST_CASE("a syntax fault is told with line and column") {
  const auto read = read_json("{\n  \"a\": ,\n}");
  REQUIRE_FALSE(read.ok());
  CHECK(read.error().detail == "not JSON at line 2, column 8");
}

// The corpus of "Parsing JSON is a minefield" (N. Seriot, MIT licence).
TEST_CASE("every broken text of the JSON corpus is refused and every sound one read") {
  const std::filesystem::path folder = BANDWRIGHT_SOURCE_DIR "/../shared/corpora/json";
  if (!std::filesystem::exists(folder)) {
    MESSAGE("skipped: the JSON corpus is not here");
    return;
  }
  int refused = 0;
  int read = 0;
  for (const auto& entry : std::filesystem::directory_iterator(folder)) {
    const std::string name = entry.path().filename().string();
    if (!name.ends_with(".json")) continue;
    std::ifstream file(entry.path(), std::ios::binary);
    const std::string text{std::istreambuf_iterator<char>(file), {}};
    CAPTURE(name);
    const auto document = read_json(text);
    if (name.starts_with("n_")) {
      CHECK_FALSE(document.ok());
      ++refused;
    } else if (name.starts_with("y_")) {
      // Sound JSON gives one value a name; what does not is refused on purpose.
      const bool duplicate = name.find("duplicated_key") != std::string::npos;
      CHECK(document.ok() != duplicate);
      if (document) CHECK_FALSE(decode_job_request(*document).ok());
      ++read;
    }
  }
  CHECK(refused == 188);
  CHECK(read == 95);
}

}  // namespace
}  // namespace bandwright
