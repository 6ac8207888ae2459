// Public raw requests, bad and good, sent whole and in pieces.
#include <doctest/doctest.h>

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <map>
#include <string>
#include <vector>

#include "tests/server/http/echo_server.h"

namespace bandwright {
namespace {

namespace fs = std::filesystem;

const fs::path kCorpus = fs::path(BANDWRIGHT_SOURCE_DIR) / "../shared/corpora/http";

// Files called bad whose first request is good here, and why. In each, that one request may be
// answered 2xx; nothing after it may.
const std::map<std::string, std::string> kFirstIsGood = {
    {"bad-008", "bad are the bytes after Connection: close, which are never read"},
    {"bad-009", "as bad-008"},
    {"bad-015", "bad is the upgraded stream; an Upgrade that is not offered is ignored"},
    {"bad-016", "as bad-015"},
};

std::vector<fs::path> files_in(const fs::path& folder) {
  std::vector<fs::path> files;
  for (const auto& entry : fs::directory_iterator(folder)) files.push_back(entry.path());
  std::sort(files.begin(), files.end());
  return files;
}

std::string read_file(const fs::path& path) {
  std::ifstream file(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(file), {}};
}

// All responses to `bytes` sent in pieces of `step`.
std::vector<TestResponse> responses_to(std::uint16_t port, const std::string& bytes,
                                       std::size_t step) {
  TestClient client(port);
  for (std::size_t at = 0; at < bytes.size(); at += step) {
    if (!client.send(std::string_view(bytes).substr(at, step))) break;
  }
  client.end_sending();
  std::vector<TestResponse> responses;
  while (auto response = client.read_response()) responses.push_back(std::move(*response));
  return responses;
}

void check_file(EchoServer& echo, const fs::path& path, bool bad) {
  const std::string bytes = read_file(path);
  const std::string name = path.filename().string();
  for (const std::size_t step : {bytes.size() + 1, std::size_t{1}, std::size_t{7}}) {
    CAPTURE(name);
    CAPTURE(step);
    const std::vector<TestResponse> responses = responses_to(echo.port(), bytes, step);
    std::ptrdiff_t good = 0;
    for (const TestResponse& response : responses) {
      CHECK(response.status < 600);
      CHECK(response.status != 500);
      if (response.status < 300) ++good;
    }
    if (bad) CHECK(good <= (kFirstIsGood.count(name.substr(0, 7)) ? 1 : 0));
  }
}

TEST_CASE("no bad request of the corpus is accepted and none harms the server") {
  if (!fs::exists(kCorpus)) {
    MESSAGE("skipped: the corpus is not beside the sources");
    return;
  }
  EchoServer echo;
  const std::vector<fs::path> files = files_in(kCorpus / "bad");
  REQUIRE(files.size() > 50);
  for (const fs::path& path : files) check_file(echo, path, true);
  CHECK(eventually([&] { return echo.answers(); }));
}

TEST_CASE("no good request of the corpus harms the server") {
  if (!fs::exists(kCorpus)) {
    MESSAGE("skipped: the corpus is not beside the sources");
    return;
  }
  EchoServer echo;
  const std::vector<fs::path> files = files_in(kCorpus / "ok");
  REQUIRE(files.size() > 50);
  for (const fs::path& path : files) check_file(echo, path, false);
  CHECK(eventually([&] { return echo.answers(); }));
}

}  // namespace
}  // namespace bandwright
