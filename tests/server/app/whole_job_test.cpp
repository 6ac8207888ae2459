// The main job from outside: over a real socket, through a crash, and with any number of threads.
#include <doctest/doctest.h>

#include <chrono>
#include <csignal>
#include <nlohmann/json.hpp>
#include <string>
#include <thread>

#include "tests/server/app/daemon.h"
#include "tests/server/http/test_client.h"
#include "tests/solver/problems.h"

namespace bandwright {
namespace {

using Json = nlohmann::ordered_json;

const std::string kRequests = std::string(BANDWRIGHT_SOURCE_DIR) + "/examples/requests/";

std::optional<TestResponse> post(const Daemon& daemon, const std::string& path,
                                 const std::string& body, const std::string& fields = "") {
  return ask(daemon.port, "POST " + path + " HTTP/1.1\r\nHost: localhost\r\n" + fields +
                              "Content-Type: application/json\r\nContent-Length: " +
                              std::to_string(body.size()) + "\r\n\r\n" + body);
}

Json get_json(const Daemon& daemon, const std::string& path, const std::string& fields = "") {
  const auto answer =
      ask(daemon.port, "GET " + path + " HTTP/1.1\r\nHost: localhost\r\n" + fields + "\r\n");
  REQUIRE(answer);
  REQUIRE_MESSAGE(answer->status == 200, answer->body);
  return Json::parse(answer->body);
}

// The job's document once it has ended. Few requests: nobody reads the daemon's log meanwhile.
Json wait_until_done(const Daemon& daemon, const std::string& path) {
  for (int i = 0; i < 20; ++i) {
    Json job = get_json(daemon, path, "Prefer: wait=5\r\n");
    if (job.at("done") == true) return job;
  }
  FAIL("the job never ended");
  return {};
}

TEST_CASE("a Touchstone file becomes ranked, buildable designs in one call") {
  const TempDir folder;
  const Daemon daemon(folder.path());
  const auto answer =
      post(daemon, "/v1/jobs", test::read_file(kRequests + "whip.json"), "Prefer: wait=25\r\n");
  REQUIRE(answer);
  REQUIRE_MESSAGE(answer->status == 201, answer->body);
  const Json job = Json::parse(answer->body);
  CHECK(job.at("state") == "succeeded");
  CHECK(job.at("stop_reason") == "converged");
  CHECK(job.at("reproducible") == true);
  const Json& first = job.at("designs").at(0);
  CHECK(first.at("meets_goals") == true);
  CHECK(first.at("yield").at("low").get<double>() > 0.9);
  for (const Json& element : first.at("network")) CHECK(!element.at("label").empty());

  const std::string self = job.at("links").at("self");
  CHECK(get_json(daemon, self).at("designs") == job.at("designs"));
  CHECK(get_json(daemon, self + "/designs/1").at("network") == first.at("network"));
}

TEST_CASE("the designs are the same bytes with 1, 2 and 4 threads") {
  for (const char* request : {"whip.json", "dipole.json", "inverted-l.json"}) {
    std::string expected;
    for (const char* threads : {"1", "2", "4"}) {
      ChildProcess solve(BANDWRIGHT_DAEMON, {"solve", kRequests + request, "--threads", threads});
      REQUIRE(solve.wait() == 0);
      const std::string designs = Json::parse(solve.output_text).at("designs").dump();
      if (expected.empty()) expected = designs;
      CHECK_MESSAGE(designs == expected, request, " with ", threads, " threads");
    }
  }
}

TEST_CASE("a job whose process is killed while it runs ends after the next start") {
  Json request = Json::parse(test::read_file(kRequests + "dipole.json"));
  request["template"] = Json::parse(
      R"({"ladder": {"min_elements": 2, "max_elements": 5, "kinds": ["inductor", "capacitor"]}})");
  request["search"] = {{"seed", 3}, {"effort", "thorough"}};
  request["budget"] = {{"run_seconds", 4}};
  request["tolerance"] = {{"samples", 500}};
  const TempDir folder;
  std::string path;
  {
    Daemon daemon(folder.path());
    const auto accepted = post(daemon, "/v1/jobs", request.dump());
    REQUIRE(accepted);
    REQUIRE_MESSAGE(accepted->status == 202, accepted->body);
    path = accepted->header("location").value();
    while (get_json(daemon, path).at("state") == "queued") {
      std::this_thread::sleep_for(std::chrono::milliseconds(10));
    }
    CHECK(get_json(daemon, path).at("state") == "running");
    daemon.process.signal(SIGKILL);
    CHECK(daemon.process.wait() == 1000 + SIGKILL);
  }
  const Daemon daemon(folder.path());
  const Json job = wait_until_done(daemon, path);
  CHECK(job.at("state") == "succeeded");
  CHECK(job.at("attempt") == 2);
  CHECK(!job.at("designs").empty());
}

}  // namespace
}  // namespace bandwright
