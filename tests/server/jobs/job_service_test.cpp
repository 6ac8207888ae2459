// A job's life as the callers of the service see it.
#include "server/jobs/job_service.h"

#include <doctest/doctest.h>

#include <mutex>
#include <set>
#include <stdexcept>
#include <string>
#include <vector>

#include "tests/server/jobs/service_fixture.h"

namespace bandwright {

TEST_CASE("a submitted job runs and its result is found") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(
      *store,
      [](const JobRecord& job, RunControl&) {
        return ExecutionResult{true, job.request + "!" + std::to_string(job.attempt), {}, {}};
      },
      service_options());
  jobs.start();
  const JobRecord job = submit(jobs, "north");
  CHECK(job.state == JobState::queued);
  const auto ended = wait_for(jobs, job);
  REQUIRE(ended.has_value());
  CHECK(ended->state == JobState::succeeded);
  CHECK(ended->result == job.request + "!1");
  CHECK(ended->attempt == 1);
  CHECK(ended->expires_at == *ended->finished_at + 7ll * 24 * 3600 * 1000);
}

TEST_CASE("a job is on disk before submit returns and waits for a service that is not started") {
  TempDir dir;
  JobRecord job;
  {
    auto store = open_store(dir.path());
    JobService jobs(*store, succeed_at_once, service_options());
    CHECK_FALSE(jobs.accepting());
    job = submit(jobs, "north");
    CHECK(jobs.find("north", job.id)->queue_position == 1);
  }
  auto store = open_store(dir.path());
  JobService jobs(*store, succeed_at_once, service_options());
  jobs.start();
  CHECK(jobs.accepting());
  CHECK(wait_for(jobs, job)->state == JobState::succeeded);
}

TEST_CASE("a running job shows its progress") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(
      *store,
      [](const JobRecord& job, RunControl& control) {
        control.set_topologies(8);
        control.topology_done();
        control.add_evaluations(1000);
        control.set_fraction(0.25);
        control.offer_margin_db(-1.5);
        return run_until_told(job, control);
      },
      service_options());
  jobs.start();
  const JobRecord job = submit(jobs, "north");
  REQUIRE(eventually([&] {
    const auto found = jobs.find("north", job.id);
    return found->progress && found->progress->best_margin_db;
  }));
  const JobProgress progress = *jobs.find("north", job.id)->progress;
  CHECK(progress.topologies == 8);
  CHECK(progress.topologies_done == 1);
  CHECK(progress.evaluations == 1000);
  CHECK(progress.fraction == 0.25);
  CHECK(progress.best_margin_db == -1.5);
}

TEST_CASE("stop ends a running job with what it has; repeating is harmless") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(*store, run_until_told, service_options());
  jobs.start();
  const JobRecord job = submit(jobs, "north");
  REQUIRE(eventually([&] { return is_running(jobs, job); }));
  CHECK(jobs.stop("north", job.id).ok());
  CHECK(jobs.stop("north", job.id).ok());
  const auto ended = wait_for(jobs, job);
  CHECK(ended->state == JobState::succeeded);
  CHECK(ended->result == "stopped");
  CHECK(jobs.stop("north", job.id).ok());
}

TEST_CASE("a job stopped while queued runs as stopped, also in a later process") {
  TempDir dir;
  JobRecord job;
  {
    auto store = open_store(dir.path());
    JobService jobs(*store, run_until_told, service_options());
    job = submit(jobs, "north");
    CHECK(jobs.stop("north", job.id)->stop_requested);
  }
  auto store = open_store(dir.path());
  JobService jobs(*store, run_until_told, service_options());
  jobs.start();
  CHECK(wait_for(jobs, job)->result == "stopped");
}

TEST_CASE("cancel ends a queued and a running job and frees the worker for the next") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.workers = 1;
  std::atomic<int> runs{0};
  JobService jobs(
      *store,
      [&](const JobRecord& job, RunControl& control) {
        return ++runs == 1 ? run_until_told(job, control) : succeed_at_once(job, control);
      },
      options);
  jobs.start();
  const JobRecord running = submit(jobs, "north");
  REQUIRE(eventually([&] { return is_running(jobs, running); }));
  const JobRecord queued = submit(jobs, "north");
  const JobRecord next = submit(jobs, "north");
  CHECK(jobs.cancel("north", queued.id)->state == JobState::cancelled);
  CHECK(jobs.cancel("north", running.id)->state == JobState::cancelled);
  CHECK(jobs.cancel("north", running.id).ok());
  CHECK(wait_for(jobs, next)->state == JobState::succeeded);
  CHECK(jobs.find("north", running.id)->state == JobState::cancelled);
  CHECK(jobs.find("north", queued.id)->state == JobState::cancelled);
  CHECK(runs == 2);
  CHECK(jobs.cancel("north", next.id).error() == Refusal::finished);
  CHECK(jobs.stop("north", next.id).error() == Refusal::finished);
}

TEST_CASE("an executor that throws fails its job without telling the caller why") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  std::mutex mutex;
  std::multiset<std::string> told;
  options.on_internal_fault = [&](const std::string&, const std::string& what) {
    std::lock_guard lock(mutex);
    told.insert(what);
  };
  std::atomic<int> runs{0};
  JobService jobs(
      *store,
      [&](const JobRecord&, RunControl&) -> ExecutionResult {
        if (++runs == 1) throw std::runtime_error("secret");
        throw 7;
      },
      options);
  jobs.start();
  for (int i = 0; i < 2; ++i) {
    const auto ended = wait_for(jobs, submit(jobs, "north"));
    CHECK(ended->state == JobState::failed);
    CHECK(ended->failure_code == "internal");
    CHECK(ended->failure_detail.find("secret") == std::string::npos);
  }
  std::lock_guard lock(mutex);
  CHECK(told == std::multiset<std::string>{"secret", "an exception of an unknown type"});
}

TEST_CASE("an executor's refusal is the job's failure") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(
      *store,
      [](const JobRecord&, RunControl&) {
        return ExecutionResult{false, {}, "too_large", "The load has too many points."};
      },
      service_options());
  jobs.start();
  const auto ended = wait_for(jobs, submit(jobs, "north"));
  CHECK(ended->state == JobState::failed);
  CHECK(ended->failure_code == "too_large");
  CHECK(ended->failure_detail == "The load has too many points.");
}

TEST_CASE("a full queue refuses the team, then everyone, and a full disk comes first") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.queue_per_team = 2;
  options.queue_total = 3;
  JobService jobs(*store, succeed_at_once, options);
  submit(jobs, "north");
  submit(jobs, "north");
  CHECK(jobs.submit(new_job("north")).error() == Refusal::team_queue_full);
  submit(jobs, "south");
  CHECK(jobs.submit(new_job("south")).error() == Refusal::service_full);

  TempDir other;
  auto full = open_store(other.path());
  options.min_free_bytes = UINT64_MAX;
  JobService starved(*full, succeed_at_once, options);
  CHECK(starved.submit(new_job("north")).error() == Refusal::disk_full);
}

TEST_CASE("a team never has more jobs running than it may, and no worker idles meanwhile") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.workers = 4;
  options.running_per_team = 2;
  std::atomic<int> now{0}, most{0};
  JobService jobs(
      *store,
      [&](const JobRecord& job, RunControl& control) {
        if (job.team == "south") return run_until_told(job, control);
        const int running = ++now;
        int seen = most;
        while (running > seen && !most.compare_exchange_weak(seen, running)) {
        }
        std::this_thread::sleep_for(std::chrono::milliseconds(5));
        --now;
        return ExecutionResult{};
      },
      options);
  jobs.start();
  std::vector<JobRecord> north;
  for (int i = 0; i < 12; ++i) north.push_back(submit(jobs, "north"));
  const JobRecord south = submit(jobs, "south");
  for (const JobRecord& job : north) CHECK(wait_for(jobs, job)->state == JobState::succeeded);
  CHECK(most == 2);
  CHECK(eventually([&] { return is_running(jobs, south); }));
}

TEST_CASE("a job is removed after its end only, and only by its team") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(*store, succeed_at_once, service_options());
  const JobRecord job = submit(jobs, "north");
  CHECK(jobs.remove("north", job.id) == Refusal::still_running);
  jobs.start();
  wait_for(jobs, job);
  CHECK(jobs.remove("south", job.id) == Refusal::not_found);
  CHECK(jobs.find("south", job.id) == std::nullopt);
  CHECK(jobs.remove("north", job.id) == std::nullopt);
  CHECK(jobs.remove("north", job.id) == Refusal::not_found);
}

TEST_CASE("a list goes on from its token, and a token that is none is refused") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(*store, succeed_at_once, service_options());
  std::vector<std::string> expected, seen;
  for (int i = 0; i < 7; ++i) expected.insert(expected.begin(), submit(jobs, "north").id);
  JobListQuery query{"north", std::nullopt, 3, ""};
  for (;;) {
    const auto page = jobs.list(query);
    REQUIRE(page.ok());
    for (const JobRecord& job : page->jobs) seen.push_back(job.id);
    if (!page->next_page) break;
    query.page_token = *page->next_page;
  }
  CHECK(seen == expected);
  for (const char* bad :
       {"x", "pt_", "pt_-1", "pt_0", "pt_00a", "pt_A", "pt_1 ", "pt_zzzzzzzzzzzzzzz"}) {
    query.page_token = bad;
    CHECK(jobs.list(query).error() == Refusal::bad_page_token);
  }
  query = {"north", JobState::succeeded, 0, ""};
  CHECK(jobs.list(query)->jobs.empty());
}

TEST_CASE("results are purged when their time is over") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.results_kept = std::chrono::seconds(0);
  options.purge_every = std::chrono::milliseconds(5);
  JobService jobs(*store, succeed_at_once, options);
  jobs.start();
  const JobRecord job = submit(jobs, "north");
  CHECK(eventually([&] { return !jobs.find("north", job.id); }));
}

}  // namespace bandwright
