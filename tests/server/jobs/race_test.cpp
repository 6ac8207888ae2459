// Many threads at once: what was acknowledged holds.
#include <doctest/doctest.h>

#include <mutex>
#include <random>
#include <set>
#include <string>
#include <vector>

#include "tests/server/jobs/service_fixture.h"

namespace bandwright {

namespace {

// Yields a few times, so that cancels fall before, into and after runs.
void linger(std::mt19937_64& random) {
  for (auto turns = random() % 60; turns > 0; --turns) std::this_thread::yield();
}

}  // namespace

TEST_CASE("an acknowledged cancel never becomes success, however it races the finish") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.workers = 3;
  options.running_per_team = 3;
  std::atomic<int> runs{0};
  JobService jobs(
      *store,
      [&](const JobRecord&, RunControl&) {
        std::mt19937_64 random(static_cast<std::uint64_t>(++runs));
        linger(random);
        return ExecutionResult{true, "{}", {}, {}};
      },
      options);
  jobs.start();

  constexpr int kCallers = 4, kJobsEach = 100;
  std::vector<std::vector<std::string>> acknowledged(kCallers), refused(kCallers);
  std::atomic<int> wrong{0};
  std::vector<std::thread> callers;
  for (int caller = 0; caller < kCallers; ++caller) {
    callers.emplace_back([&, caller] {
      std::mt19937_64 random(static_cast<std::uint64_t>(caller));
      for (int i = 0; i < kJobsEach; ++i) {
        const auto job = jobs.submit(new_job("north"));
        if (!job.ok()) {
          ++wrong;
          continue;
        }
        // One in two waits until the job is running, the others may find it queued.
        for (int turn = 0; i % 2 && turn < 10000; ++turn) {
          if (jobs.find("north", job->id)->state != JobState::queued) break;
        }
        linger(random);
        const auto cancelled = jobs.cancel("north", job->id);
        const auto now = jobs.find("north", job->id);
        if (cancelled.ok()) {
          acknowledged[caller].push_back(job->id);
          if (now->state != JobState::cancelled) ++wrong;
        } else {
          refused[caller].push_back(job->id);
          if (now->state != JobState::succeeded) ++wrong;
        }
      }
    });
  }
  for (std::thread& caller : callers) caller.join();
  jobs.shutdown(kLong);
  CHECK(wrong == 0);
  std::size_t cancels = 0;
  for (int caller = 0; caller < kCallers; ++caller) {
    for (const std::string& id : acknowledged[caller]) {
      CHECK(jobs.find("north", id)->state == JobState::cancelled);
      CHECK(jobs.find("north", id)->result.empty());
    }
    for (const std::string& id : refused[caller]) {
      CHECK(jobs.find("north", id)->state == JobState::succeeded);
    }
    cancels += acknowledged[caller].size();
  }
  CHECK(cancels > 0);
}

TEST_CASE("a stop that is acknowledged before the end reaches the run, however early it comes") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.workers = 3;
  options.running_per_team = 3;
  JobService jobs(*store, run_until_told, options);  // without the stop it would run for ever
  jobs.start();
  std::mt19937_64 random(1);
  for (int i = 0; i < 100; ++i) {
    const JobRecord job = submit(jobs, "north");
    linger(random);
    REQUIRE(jobs.stop("north", job.id).ok());
    const auto ended = wait_for(jobs, job);
    REQUIRE(ended->state == JobState::succeeded);
    CHECK(ended->result == "stopped");
  }
}

TEST_CASE("every job runs exactly once when many threads submit to many workers") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.workers = 4;
  options.running_per_team = 2;
  std::mutex mutex;
  std::multiset<std::string> ran;
  JobService jobs(
      *store,
      [&](const JobRecord& job, RunControl&) {
        std::lock_guard lock(mutex);
        ran.insert(job.id);
        return ExecutionResult{true, job.id, {}, {}};
      },
      options);
  jobs.start();
  std::vector<std::vector<JobRecord>> submitted(4);
  std::vector<std::thread> callers;
  for (std::size_t caller = 0; caller < submitted.size(); ++caller) {
    callers.emplace_back([&, caller] {
      for (int i = 0; i < 40; ++i) {
        auto job = jobs.submit(new_job("team" + std::to_string(caller)));
        if (job.ok()) submitted[caller].push_back(*job);
      }
    });
  }
  for (std::thread& caller : callers) caller.join();
  std::multiset<std::string> expected;
  for (const auto& list : submitted) {
    for (const JobRecord& job : list) {
      CHECK(wait_for(jobs, job)->result == job.id);
      expected.insert(job.id);
    }
  }
  CHECK(expected.size() == 160);
  CHECK(ran == expected);
}

}  // namespace bandwright
