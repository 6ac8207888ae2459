// The daemon from start to stop.
#include <doctest/doctest.h>

#include <chrono>
#include <csignal>
#include <optional>
#include <sstream>
#include <string>
#include <thread>

#include "tests/server/app/daemon.h"
#include "tests/server/http/test_client.h"

namespace bandwright {
namespace {

std::optional<TestResponse> get(const Daemon& daemon, const std::string& path) {
  return ask(daemon.port, "GET " + path + " HTTP/1.1\r\nHost: localhost\r\n\r\n");
}

// More work than any test waits for.
const std::string kLongJob = R"({
  "load": {"circuit": {"series": [{"resistor_ohm": 20}, {"capacitor_f": "20pF"}]}},
  "template": {"ladder": {"min_elements": 2, "max_elements": 6, "kinds": ["inductor", "capacitor"]}},
  "goals": [{"quantity": "return_loss", "from_hz": "100MHz", "to_hz": "200MHz"}],
  "search": {"effort": "thorough"},
  "budget": {"run_seconds": 600}
})";

// Submits the long job; returns its path once it runs.
std::string start_long_job(const Daemon& daemon) {
  const auto accepted =
      ask(daemon.port,
          "POST /v1/jobs HTTP/1.1\r\nHost: localhost\r\nContent-Type: application/json\r\n"
          "Content-Length: " +
              std::to_string(kLongJob.size()) + "\r\n\r\n" + kLongJob);
  REQUIRE(accepted);
  REQUIRE_MESSAGE(accepted->status == 202, accepted->body);
  const std::string path = accepted->header("location").value();
  for (int i = 0; i < 1000; ++i) {
    const auto job = get(daemon, path);
    if (job && job->body.find("\"running\"") != std::string::npos) return path;
    std::this_thread::sleep_for(std::chrono::milliseconds(10));
  }
  FAIL("the job never ran");
  return path;
}

bool becomes_ready(const Daemon& daemon, int status) {
  for (int i = 0; i < 1000; ++i) {
    const auto ready = get(daemon, "/readyz");
    if (ready && ready->status == status) return true;
    std::this_thread::sleep_for(std::chrono::milliseconds(10));
  }
  return false;
}

TEST_CASE("the daemon says where it listens, becomes ready, and ends on either signal") {
  for (const int signal : {SIGTERM, SIGINT}) {
    const TempDir folder;
    Daemon daemon(folder.path());
    CHECK(becomes_ready(daemon, 200));
    daemon.process.signal(signal);
    CHECK(daemon.process.wait() == 0);
    CHECK(daemon.process.error_text.find("\"msg\":\"stopped\"") != std::string::npos);
  }
}

TEST_CASE("a second daemon on the same data folder is refused with status 69") {
  const TempDir folder;
  const Daemon first(folder.path());
  ChildProcess second(BANDWRIGHT_DAEMON, serve_arguments(folder.path()));
  CHECK(second.wait() == 69);
  CHECK(second.error_text.find("in use by another process") != std::string::npos);
}

TEST_CASE("an address in use is refused with status 69 and its reason") {
  const TempDir one;
  const TempDir two;
  const Daemon first(one.path());
  ChildProcess second(BANDWRIGHT_DAEMON,
                      {"serve", "--listen", "127.0.0.1:" + std::to_string(first.port), "--data",
                       two.path().string()});
  CHECK(second.wait() == 69);
  CHECK(second.error_text.find("cannot listen") != std::string::npos);
}

TEST_CASE("while it stops the daemon answers, but is not ready") {
  const TempDir folder;
  Daemon daemon(folder.path(), {"--shutdown-seconds", "600"});
  const std::string job = start_long_job(daemon);
  daemon.process.signal(SIGTERM);
  CHECK(becomes_ready(daemon, 503));
  CHECK(get(daemon, job)->status == 200);
  // The second signal cuts the ten minutes short.
  daemon.process.signal(SIGTERM);
  CHECK(daemon.process.wait() == 0);
}

TEST_CASE("a job that outlasts the stop runs again after the next start, its attempt given back") {
  const TempDir folder;
  std::string job;
  {
    Daemon daemon(folder.path(), {"--shutdown-seconds", "0"});
    job = start_long_job(daemon);
    daemon.process.signal(SIGTERM);
    CHECK(daemon.process.wait() == 0);
  }
  const Daemon daemon(folder.path());
  bool runs = false;
  std::string body;
  for (int i = 0; i < 1000 && !runs; ++i) {
    body = get(daemon, job)->body;
    runs = body.find("\"running\"") != std::string::npos;
    std::this_thread::sleep_for(std::chrono::milliseconds(10));
  }
  CHECK(runs);
  CAPTURE(body);
  CHECK(body.find("\"attempt\":1,") != std::string::npos);
}

TEST_CASE("what is logged is one JSON object a line") {
  const TempDir folder;
  Daemon daemon(folder.path());
  CHECK(get(daemon, "/livez"));
  daemon.process.signal(SIGTERM);
  REQUIRE(daemon.process.wait() == 0);
  std::istringstream lines(daemon.process.error_text);
  for (std::string line; std::getline(lines, line);) {
    CAPTURE(line);
    CHECK(line.front() == '{');
    CHECK(line.back() == '}');
    CHECK(line.find("\"time\":\"") == 1);
    CHECK(line.find("\"level\":\"") != std::string::npos);
  }
}

}  // namespace
}  // namespace bandwright
