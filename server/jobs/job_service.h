// Takes jobs, runs them on worker threads and tells how they stand.
//
// Knows when to solve and never what: the executor turns a request text into a result text. A job
// is on disk before `submit` returns. Each run holds a fresh lease; what a run records counts only
// while its lease is the job's, so a result is recorded at most once and an acknowledged cancel
// stays a cancel.
//
// Thread safety: all members may be called from any thread. Callbacks run on a thread of the
// service and must not block for long.
#pragma once

#include <chrono>
#include <cstdint>
#include <functional>
#include <memory>
#include <optional>
#include <string>

#include "server/message/job.h"
#include "server/store/store.h"
#include "solver/base/result.h"
#include "solver/base/run_control.h"

namespace bandwright {

struct ExecutionResult {
  bool ok = true;
  std::string result;        // when ok
  std::string failure_code;  // when not
  std::string failure_detail;
};

// Runs one job to its end, watching `control`. `job.attempt` counts this run.
using Executor = std::function<ExecutionResult(const JobRecord& job, RunControl& control)>;

struct JobServiceOptions {
  int workers = 2;
  int max_attempts = 3;
  int queue_per_team = 100;
  int queue_total = 1000;
  int running_per_team = 2;
  std::chrono::seconds results_kept{7 * 24 * 3600};
  std::uint64_t min_free_bytes = 256ull << 20;
  std::chrono::milliseconds purge_every{60'000};
  // Told the job's id and what an executor threw; the caller of the service sees neither.
  std::function<void(const std::string& id, const std::string& what)> on_internal_fault;
};

class JobService {
 public:
  JobService(Store& store, Executor executor, JobServiceOptions options);
  ~JobService();
  JobService(const JobService&) = delete;
  JobService& operator=(const JobService&) = delete;

  // Takes up what an earlier process left (running jobs are queued again, or failed with code
  // "crashed" after max_attempts) and starts the workers.
  void start();
  // No new claims; running jobs get `grace` to end, then are queued again with the attempt given
  // back. Returns when every worker has ended.
  void shutdown(std::chrono::milliseconds grace);
  bool accepting() const;

  Result<JobRecord, Refusal> submit(const NewJob& job);
  std::optional<JobRecord> find(const std::string& team, const std::string& id) const;
  Result<JobSummaryPage, Refusal> list(const JobListQuery& query) const;
  // Finish now with the best so far. A queued job runs briefly and ends. Repeating is harmless.
  Result<JobRecord, Refusal> stop(const std::string& team, const std::string& id);
  // Never succeeds after this returned. Repeating is harmless; a finished job is a refusal.
  Result<JobRecord, Refusal> cancel(const std::string& team, const std::string& id);
  // Removes a job that has ended.
  std::optional<Refusal> remove(const std::string& team, const std::string& id);

  // Calls back once: when the job has ended (or was removed), or at `deadline`, with the record as
  // it stands then (nothing if it is gone).
  void when_done(const std::string& team, const std::string& id,
                 std::chrono::steady_clock::time_point deadline,
                 std::function<void(std::optional<JobRecord>)> callback);

 private:
  struct State;
  std::unique_ptr<State> state_;
};

}  // namespace bandwright
