// Ending and starting again, in order and out of it.
#include <doctest/doctest.h>
#include <signal.h>
#include <sys/wait.h>
#include <unistd.h>

#include <random>
#include <set>
#include <string>
#include <vector>

#include "tests/server/jobs/service_fixture.h"

namespace bandwright {

TEST_CASE("a shutdown whose grace is over queues running jobs again and gives the attempt back") {
  TempDir dir;
  JobRecord running, queued;
  {
    auto store = open_store(dir.path());
    JobServiceOptions options = service_options();
    options.workers = 1;
    JobService jobs(*store, run_until_told, options);
    jobs.start();
    running = submit(jobs, "north");
    REQUIRE(eventually([&] { return is_running(jobs, running); }));
    queued = submit(jobs, "north");
    jobs.shutdown(std::chrono::milliseconds(10));
    CHECK_FALSE(jobs.accepting());
    CHECK(jobs.submit(new_job("north")).error() == Refusal::shutting_down);
    CHECK(jobs.find("north", running.id)->state == JobState::queued);
    CHECK(jobs.find("north", running.id)->attempt == 0);
    CHECK(jobs.find("north", queued.id)->state == JobState::queued);
  }
  auto store = open_store(dir.path());
  JobService jobs(*store, succeed_at_once, service_options());
  jobs.start();
  CHECK(wait_for(jobs, running)->state == JobState::succeeded);
  CHECK(jobs.find("north", running.id)->attempt == 1);
  CHECK(wait_for(jobs, queued)->state == JobState::succeeded);
}

TEST_CASE("a job that ends within the grace is recorded and no other is begun") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.workers = 1;
  std::atomic<bool> go{false};
  JobService jobs(
      *store,
      [&](const JobRecord&, RunControl&) {
        eventually([&] { return go.load(); });
        return ExecutionResult{true, "in time", {}, {}};
      },
      options);
  jobs.start();
  const JobRecord first = submit(jobs, "north");
  const JobRecord second = submit(jobs, "north");
  REQUIRE(eventually([&] { return is_running(jobs, first); }));
  std::thread ender([&] { jobs.shutdown(kLong); });
  REQUIRE(eventually([&] { return !jobs.accepting(); }));
  go = true;
  ender.join();
  CHECK(jobs.find("north", first.id)->result == "in time");
  CHECK(jobs.find("north", second.id)->state == JobState::queued);
}

TEST_CASE("a second shutdown with less grace shortens the first") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(*store, run_until_told, service_options());
  jobs.start();
  const JobRecord job = submit(jobs, "north");
  REQUIRE(eventually([&] { return is_running(jobs, job); }));
  std::thread patient([&] { jobs.shutdown(std::chrono::hours(1)); });
  REQUIRE(eventually([&] { return !jobs.accepting(); }));
  jobs.shutdown(std::chrono::milliseconds(0));
  patient.join();
  CHECK(jobs.find("north", job.id)->state == JobState::queued);
}

TEST_CASE("a cancel acknowledged during a shutdown is not undone by giving jobs back") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(*store, run_until_told, service_options());
  jobs.start();
  const JobRecord job = submit(jobs, "north");
  REQUIRE(eventually([&] { return is_running(jobs, job); }));
  std::thread ender([&] { jobs.shutdown(kLong); });
  REQUIRE(eventually([&] { return !jobs.accepting(); }));
  CHECK(jobs.cancel("north", job.id).ok());
  ender.join();
  CHECK(jobs.find("north", job.id)->state == JobState::cancelled);
}

TEST_CASE("a service takes up what a crash has left, and gives up after the last attempt") {
  TempDir dir;
  JobRecord job;
  {
    auto store = open_store(dir.path());
    job = insert(*store, new_job("north"));
    claim(*store);
    store->request_stop("north", job.id);
  }
  {
    auto store = open_store(dir.path());
    JobService jobs(*store, run_until_told, service_options());
    jobs.start();
    const auto ended = wait_for(jobs, job);
    CHECK(ended->result == "stopped");
    CHECK(ended->attempt == 2);
  }
  {
    auto store = open_store(dir.path());
    job = insert(*store, new_job("north"));
    claim(*store);
  }
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.max_attempts = 1;
  JobService jobs(*store, succeed_at_once, options);
  jobs.start();
  const auto ended = wait_for(jobs, job);
  CHECK(ended->state == JobState::failed);
  CHECK(ended->failure_code == "crashed");
}

namespace {

// A process that submits for ever and tells each id once it is acknowledged: 29 characters.
[[noreturn]] void serve_until_killed(const std::filesystem::path& dir, int acknowledge) {
  StoreOptions store_options = test_options();
  store_options.on_fatal = [](const StoreFault&) { _exit(74); };
  auto opened = Store::open(dir, store_options);
  if (!opened.ok()) _exit(1);
  JobServiceOptions options = service_options();
  options.max_attempts = 1000;
  options.queue_per_team = 1 << 20;
  options.queue_total = 1 << 20;
  JobService jobs(
      **opened,
      [](const JobRecord& job, RunControl&) {
        return ExecutionResult{true, job.id, {}, {}};
      },
      options);
  jobs.start();
  for (;;) {
    const auto job = jobs.submit(new_job("north"));
    if (!job.ok()) _exit(2);
    if (write(acknowledge, job->id.data(), job->id.size()) < 0) _exit(3);
  }
}

}  // namespace

TEST_CASE("killed at any moment the service loses no acknowledged job and makes no job twice") {
  TempDir dir;
  std::mt19937_64 random(3);
  std::string acknowledged;
  for (int round = 0; round < 20; ++round) {
    int told[2];
    REQUIRE(pipe(told) == 0);
    const pid_t server = fork();
    REQUIRE(server >= 0);
    if (server == 0) serve_until_killed(dir.path(), told[1]);
    close(told[1]);
    char bytes[4096];
    // Killed after some acknowledgements, so every round has had work to lose.
    const std::size_t enough = acknowledged.size() + 29 * (1 + random() % 20);
    while (acknowledged.size() < enough) {
      const ssize_t got = read(told[0], bytes, sizeof bytes);
      REQUIRE(got > 0);
      acknowledged.append(bytes, static_cast<std::size_t>(got));
    }
    kill(server, SIGKILL);
    waitpid(server, nullptr, 0);
    for (ssize_t got; (got = read(told[0], bytes, sizeof bytes)) > 0;) {
      acknowledged.append(bytes, static_cast<std::size_t>(got));
    }
    close(told[0]);
    REQUIRE(acknowledged.size() % 29 == 0);
  }

  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.max_attempts = 1000;
  JobService jobs(
      *store,
      [](const JobRecord& job, RunControl&) {
        return ExecutionResult{true, job.id, {}, {}};
      },
      options);
  jobs.start();
  std::set<std::string> known;
  for (std::size_t at = 0; at < acknowledged.size(); at += 29) {
    const std::string id = acknowledged.substr(at, 29);
    const auto ended = wait_for(jobs, "north", id);
    REQUIRE(ended.has_value());
    CHECK(ended->state == JobState::succeeded);
    CHECK(ended->result == id);
    CHECK(known.insert(id).second);
  }
  // Beyond those there is at most the one of each round whose acknowledgement was cut off.
  const auto total = static_cast<std::size_t>(store->counts()->total);
  CHECK(total >= known.size());
  CHECK(total <= known.size() + 20);
}

}  // namespace bandwright
