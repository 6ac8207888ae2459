// The requests under examples/ do what the manual says of them.
#include <doctest/doctest.h>

#include <filesystem>
#include <fstream>
#include <iterator>
#include <map>
#include <nlohmann/json.hpp>
#include <set>
#include <string>

#include "server/api/api.h"

namespace bandwright {
namespace {

namespace fs = std::filesystem;
using nlohmann::json;

constexpr int kThreads = 2;

fs::path examples() {
  return fs::path(BANDWRIGHT_SOURCE_DIR) / "examples";
}

// The text of every file in a folder, by name.
std::map<std::string, std::string> texts(const fs::path& folder) {
  std::map<std::string, std::string> out;
  for (const auto& entry : fs::directory_iterator(folder)) {
    std::ifstream file(entry.path(), std::ios::binary);
    out[entry.path().filename().string()] = {std::istreambuf_iterator<char>(file), {}};
  }
  return out;
}

// What `bandwrightd solve` prints for a request.
json answer(const std::string& request) {
  const SolveOnce once = solve_once(request, kThreads);
  REQUIRE_MESSAGE(once.accepted, once.text);
  return json::parse(once.text);
}

TEST_CASE("every example request is answered with ranked designs that meet its goals") {
  const auto requests = texts(examples() / "requests");
  REQUIRE(requests.size() >= 3);
  for (const auto& [name, text] : requests) {
    CAPTURE(name);
    const json request = json::parse(text);
    const json job = answer(text);
    CHECK(job["state"] == "succeeded");
    CHECK(job["warnings"].empty());
    const json& designs = job["designs"];
    REQUIRE(designs.size() == request["search"]["designs"].get<std::size_t>());
    for (std::size_t i = 0; i < designs.size(); ++i) {
      CAPTURE(i);
      CHECK(designs[i]["rank"] == i + 1);
      CHECK(designs[i]["meets_goals"] == true);
      CHECK(designs[i]["goals"][0]["value_db"].get<double>() >=
            request["goals"][0]["at_least_db"].get<double>());
    }
    // Made to be built: nearly every board of the first design is a good one.
    CHECK(designs[0]["yield"]["low"].get<double>() > 0.9);
    // Without a network the goal is far away, or the example would show nothing.
    CHECK(job["unmatched"]["return_loss_db"].get<double>() <
          request["goals"][0]["at_least_db"].get<double>() / 2);
  }
}

TEST_CASE("every example request carries one of the example loads, and every load is used") {
  const auto loads = texts(examples() / "loads");
  std::set<std::string> carried;
  for (const auto& [name, text] : texts(examples() / "requests")) {
    carried.insert(json::parse(text)["load"]["touchstone"].get<std::string>());
  }
  std::set<std::string> kept;
  for (const auto& [name, text] : loads) kept.insert(text);
  CHECK(carried == kept);
}

}  // namespace
}  // namespace bandwright
