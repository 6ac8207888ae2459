// The statements over jobs, each prepared once. Callers bring the transaction.
#pragma once

#include <chrono>
#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "server/message/job.h"
#include "server/store/database.h"

namespace bandwright {

struct TeamQueue {
  std::string team;
  std::int64_t queued = 0;
};

struct NumberedJob {
  std::int64_t number = 0;  // order of creation
  JobRecord job;
};

// Thread safety: none; the store's mutex guards it.
class JobTable {
 public:
  explicit JobTable(Database& database);

  void insert(const std::string& id, const NewJob& job, UnixMillis now);
  // The job at the head of the queue of the team whose turn it is after `last_team`.
  std::optional<std::int64_t> next_queued(int running_per_team, const std::string& last_team);
  void start(std::int64_t number, const std::string& lease, UnixMillis now);
  // Where the lease is current; the number of the job ended, if it was.
  std::optional<std::int64_t> end_run(const std::string& id, const std::string& lease,
                                      JobState state, UnixMillis now, UnixMillis expires);
  void set_failure(std::int64_t number, const std::string& code, const std::string& detail);
  void set_result(std::int64_t number, const std::string& result);
  bool give_back(const std::string& id, const std::string& lease);
  int fail_crashed(int max_attempts, UnixMillis now, UnixMillis expires);
  int queue_again();

  bool cancel(std::int64_t number, UnixMillis now, UnixMillis expires);
  bool mark_stop(std::int64_t number);
  void erase(std::int64_t number);

  std::optional<NumberedJob> find(const std::string& team, const std::string& id);
  NumberedJob with_texts(std::int64_t number);
  // Nothing if the lease is not the job's; else whether a stop was requested.
  std::optional<bool> lease_standing(const std::string& id, const std::string& lease);
  std::vector<NumberedJob> page(const std::string& team, std::optional<JobState> state,
                                std::int64_t before, int size);
  std::vector<std::int64_t> expired(UnixMillis now, int batch);

  std::int64_t queued_in(const std::string& team);
  std::int64_t count(JobState state);
  std::int64_t count_all();
  std::vector<TeamQueue> queues();
  // How many of the team's queued jobs are not after this one.
  std::int64_t place_in_team(const std::string& team, std::int64_t number);

 private:
  Statement insert_job_, insert_request_, insert_result_;
  Statement next_queued_, start_, end_run_, set_failure_, give_back_, fail_crashed_, queue_again_;
  Statement cancel_, mark_stop_, erase_job_, erase_request_, erase_result_;
  Statement find_, by_number_, request_, result_, lease_, page_, page_in_state_, expired_;
  Statement queued_in_, count_, count_all_, queues_, place_;
};

}  // namespace bandwright
