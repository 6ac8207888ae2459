// Jobs on disk. What an operation has answered survives process death and power loss.
//
// One SQLite file in the data folder, opened by one process at a time. Requests and results are
// opaque bytes. The rules of a job's life that must be atomic are kept here, each in one
// transaction: the limits of the queue, who may record a result, and that a job ends once.
//
// A lease is the right to record the outcome of one run. Claiming a job makes a fresh one;
// cancelling it, giving it back or recovering after a crash takes it away.
//
// Faults: an operation answers `disk_full` when nothing was changed for want of space. Anything
// else that goes wrong while the store is open (a failed write or sync, a damaged file) cannot be
// repaired by trying again, as the system may have dropped what it failed to write. Then
// `on_fatal` is called once, from the thread that saw it; it should end the process with status
// 74. If it returns, that operation and all later ones answer `failed` and do not touch the file.
//
// Thread safety: all members may be called from any thread.
#pragma once

#include <chrono>
#include <cstdint>
#include <filesystem>
#include <functional>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "server/message/job.h"
#include "solver/base/result.h"

namespace bandwright {

struct StoreFault {
  enum class Kind {
    locked,        // another process has the store open
    newer_schema,  // written by a newer version
    unusable,      // cannot be opened, or is something else
    disk_full,     // nothing was changed
    failed,        // see above
  };
  Kind kind = Kind::failed;
  std::string detail;
};

UnixMillis system_clock_now();
// Ends the process at once with status 74 (EX_IOERR of sysexits).
[[noreturn]] void exit_on_store_failure(const StoreFault& fault);

struct StoreOptions {
  std::function<UnixMillis()> clock = system_clock_now;
  std::function<void(const StoreFault&)> on_fatal = exit_on_store_failure;
  std::int64_t max_bytes = 64ll << 30;        // jobs are taken up to this size of the file
  std::uint64_t ballast_bytes = 16ull << 20;  // kept aside on disk, and above max_bytes
  std::string vfs;                            // a registered SQLite VFS; empty: the platform's
};

struct QueueLimits {
  int per_team = 100;
  int total = 1000;
};

struct Insertion {
  enum class Outcome { stored, team_queue_full, total_queue_full };
  Outcome outcome = Outcome::stored;
  JobRecord job;  // when stored
};

struct Claim {
  JobRecord job;
  std::string lease;
};

// What became of a run whose lease is shown.
struct Standing {
  bool lease_current = false;
  bool stop_requested = false;
};

struct Outcome {
  bool succeeded = true;
  std::string result;        // when succeeded
  std::string failure_code;  // when not
  std::string failure_detail;
};

struct Change {
  enum class Effect { changed, unchanged, not_found, finished };
  Effect effect = Effect::not_found;
  JobRecord job;  // unless not_found
};

enum class Removal { removed, not_found, still_running };

struct Recovery {
  int queued_again = 0;
  int crashed = 0;
};

struct JobPage {
  std::vector<JobRecord> jobs;              // newest first, without request and result
  std::optional<std::int64_t> next_before;  // pass as `before` for the page after this
};

struct JobCounts {
  std::int64_t queued = 0;
  std::int64_t running = 0;
  std::int64_t total = 0;
};

class Store {
 public:
  template <class T>
  using Answer = Result<T, StoreFault>;
  using Kept = std::chrono::milliseconds;  // from a job's end to its expiry

  // Creates the folder (for its owner only) and the file if they are missing.
  static Answer<std::unique_ptr<Store>> open(const std::filesystem::path& data_dir,
                                             StoreOptions options);
  ~Store();
  Store(const Store&) = delete;
  Store& operator=(const Store&) = delete;

  // Takes a job into the queue, unless it is full.
  Answer<Insertion> insert(const NewJob& job, const QueueLimits& limits);
  // The next queued job, now running: teams take turns, first come first served inside one; a team
  // with `running_per_team` jobs running is passed over. Counts the attempt.
  Answer<std::optional<Claim>> claim_next(int running_per_team);
  Answer<Standing> standing(const std::string& id, const std::string& lease);
  // Records how a run ended; false if its lease is no longer the job's.
  Answer<bool> finish(const std::string& id, const std::string& lease, const Outcome& outcome,
                      Kept kept);
  // Back to its place in the queue, as if it had not been claimed; false as above.
  Answer<bool> give_back(const std::string& id, const std::string& lease);
  // For the start of a process: jobs left running are queued again, or failed with code "crashed"
  // once they have been started `max_attempts` times.
  Answer<Recovery> recover(int max_attempts, Kept kept);

  // Ends a queued or running job as cancelled. Unchanged if it was cancelled before.
  Answer<Change> cancel(const std::string& team, const std::string& id, Kept kept);
  // Marks a job that has not ended. Unchanged if it was marked before, even if it then succeeded.
  Answer<Change> request_stop(const std::string& team, const std::string& id);
  Answer<Removal> remove(const std::string& team, const std::string& id);

  // With request, result and, while queued, the place in the queue.
  Answer<std::optional<JobRecord>> find(const std::string& team, const std::string& id);
  // At most `size` jobs created before the one numbered `before`; nothing: from the newest.
  Answer<JobPage> list(const std::string& team, std::optional<JobState> state, int size,
                       std::optional<std::int64_t> before);
  Answer<JobCounts> counts();

  // Deletes up to `batch` jobs past their expiry and returns how many; takes the ballast back in
  // when there is room.
  Answer<int> purge(int batch);
  // What jobs may still take: free on the disk, and free inside the file.
  std::uint64_t free_bytes();

 private:
  struct Core;
  explicit Store(std::unique_ptr<Core> core);
  std::unique_ptr<Core> core_;
};

}  // namespace bandwright
