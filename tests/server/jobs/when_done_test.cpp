// Everyone who waits is told once.
#include <doctest/doctest.h>

#include <stdexcept>
#include <vector>

#include "tests/server/jobs/service_fixture.h"

namespace bandwright {

TEST_CASE("whoever waits for a job is called once, whenever and however it ends") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobServiceOptions options = service_options();
  options.workers = 3;
  options.running_per_team = 3;
  std::vector<std::atomic<int>> calls(60);
  std::atomic<int> unended{0};
  {
    JobService jobs(*store, succeed_at_once, options);
    jobs.start();
    for (std::size_t i = 0; i < calls.size(); i += 3) {
      const JobRecord job = submit(jobs, "north");
      const auto count = [&](std::size_t at) {
        return [&, at](std::optional<JobRecord> record) {
          ++calls[at];
          if (!record || !is_final(record->state)) ++unended;
        };
      };
      jobs.when_done("north", job.id, far_off(), count(i));
      jobs.when_done("north", job.id, far_off(), count(i + 1));
      if (i % 2 == 0) jobs.cancel("north", job.id);
      jobs.when_done("north", job.id, far_off(), count(i + 2));
    }
    CHECK(eventually([&] {
      for (const auto& count : calls) {
        if (count == 0) return false;
      }
      return true;
    }));
  }
  for (const auto& count : calls) CHECK(count == 1);
  CHECK(unended == 0);
}

TEST_CASE("at the deadline the job is told as it stands") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(*store, run_until_told, service_options());
  const JobRecord job = submit(jobs, "north");
  std::promise<std::optional<JobRecord>> told;
  jobs.when_done("north", job.id, std::chrono::steady_clock::now() + std::chrono::milliseconds(20),
                 [&](std::optional<JobRecord> record) { told.set_value(std::move(record)); });
  const auto record = told.get_future().get();
  REQUIRE(record.has_value());
  CHECK(record->state == JobState::queued);
}

TEST_CASE("a deadline that never comes does not keep a waiter from the end of the job") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(*store, succeed_at_once, service_options());
  const JobRecord job = submit(jobs, "north");
  std::promise<JobState> told;
  jobs.when_done("north", job.id, std::chrono::steady_clock::time_point::max(),
                 [&](std::optional<JobRecord> record) { told.set_value(record->state); });
  jobs.start();
  CHECK(told.get_future().get() == JobState::succeeded);
}

TEST_CASE("waiting for a job that is not there, or another team's, ends at once with nothing") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(*store, succeed_at_once, service_options());
  const JobRecord job = submit(jobs, "north");
  std::atomic<int> owner_told{0};
  jobs.when_done("north", job.id, far_off(), [&](std::optional<JobRecord>) { ++owner_told; });
  CHECK(wait_for(jobs, "north", "jb_none") == std::nullopt);
  CHECK(wait_for(jobs, "south", job.id) == std::nullopt);
  CHECK(owner_told == 0);
}

TEST_CASE("a callback that throws does not keep others from being called") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(*store, succeed_at_once, service_options());
  jobs.start();
  const JobRecord job = submit(jobs, "north");
  jobs.when_done("north", job.id, far_off(),
                 [](std::optional<JobRecord>) { throw std::runtime_error("gone"); });
  CHECK(wait_for(jobs, job)->state == JobState::succeeded);
}

TEST_CASE("waiters are let go when the service shuts down") {
  TempDir dir;
  auto store = open_store(dir.path());
  JobService jobs(*store, run_until_told, service_options());
  const JobRecord job = submit(jobs, "north");
  std::atomic<int> calls{0};
  jobs.when_done("north", job.id, far_off(), [&](std::optional<JobRecord>) { ++calls; });
  jobs.shutdown(std::chrono::milliseconds(0));
  CHECK(eventually([&] { return calls == 1; }));
  jobs.when_done("north", job.id, far_off(), [&](std::optional<JobRecord>) { ++calls; });
  CHECK(eventually([&] { return calls == 2; }));
}

}  // namespace bandwright
