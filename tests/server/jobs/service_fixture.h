// What most tests of the job service begin with.
#pragma once

#include <doctest/doctest.h>

#include <atomic>
#include <chrono>
#include <functional>
#include <future>
#include <memory>
#include <optional>
#include <string>
#include <thread>
#include <utility>

#include "server/jobs/job_service.h"
#include "tests/server/store/store_fixture.h"

namespace bandwright {

// Long enough never to pass in a test that holds.
inline constexpr std::chrono::seconds kLong{60};

inline std::chrono::steady_clock::time_point far_off() {
  return std::chrono::steady_clock::now() + kLong;
}

inline JobServiceOptions service_options() {
  JobServiceOptions options;
  options.min_free_bytes = 0;
  return options;
}

// Waits until `holds`; false if it does not within kLong.
inline bool eventually(const std::function<bool()>& holds) {
  const auto end = far_off();
  while (!holds()) {
    if (std::chrono::steady_clock::now() > end) return false;
    std::this_thread::sleep_for(std::chrono::milliseconds(1));
  }
  return true;
}

inline ExecutionResult succeed_at_once(const JobRecord&, RunControl&) {
  return {true, "{}", {}, {}};
}

// Runs until it is told to end, as a search without a budget would.
inline ExecutionResult run_until_told(const JobRecord&, RunControl& control) {
  while (!control.should_end()) std::this_thread::sleep_for(std::chrono::milliseconds(1));
  return {true, control.cause() == EndCause::stopped ? "stopped" : "ended", {}, {}};
}

inline JobRecord submit(JobService& jobs, const std::string& team) {
  auto taken = jobs.submit(new_job(team));
  REQUIRE(taken.ok());
  return *taken;
}

// The job once it has ended, or as it stands after kLong.
inline std::optional<JobRecord> wait_for(JobService& jobs, const std::string& team,
                                         const std::string& id) {
  auto ended = std::make_shared<std::promise<std::optional<JobRecord>>>();
  jobs.when_done(team, id, far_off(),
                 [ended](std::optional<JobRecord> record) { ended->set_value(std::move(record)); });
  return ended->get_future().get();
}

inline std::optional<JobRecord> wait_for(JobService& jobs, const JobRecord& job) {
  return wait_for(jobs, job.team, job.id);
}

inline bool is_running(JobService& jobs, const JobRecord& job) {
  const auto found = jobs.find(job.team, job.id);
  return found && found->state == JobState::running && found->progress;
}

}  // namespace bandwright
