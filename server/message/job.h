// A job as stored and shown: the request and result are opaque text here.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace bandwright {

enum class JobState { queued, running, succeeded, failed, cancelled, expired };

std::string_view job_state_name(JobState state);
std::optional<JobState> job_state_from_name(std::string_view name);
inline bool is_final(JobState state) { return state != JobState::queued && state != JobState::running; }

// Milliseconds since 1970-01-01 UTC.
using UnixMillis = std::int64_t;

struct JobProgress {
  double fraction = 0;
  std::uint64_t evaluations = 0;
  int topologies_done = 0;
  int topologies = 0;
  std::optional<double> best_margin_db;
};

struct NewJob {
  std::string team;
  std::string name;
  std::string request;         // the accepted request, as text
  std::string request_digest;  // "sha256:..."
  std::uint64_t seed = 0;
};

struct JobRecord {
  std::string id;  // "jb_..."
  std::string team;
  std::string name;
  JobState state = JobState::queued;
  std::int64_t version = 1;    // grows with every stored change
  std::string request;
  std::string request_digest;
  std::uint64_t seed = 0;
  std::string result;          // text of the finished report; empty unless succeeded
  std::string failure_code;    // set when failed
  std::string failure_detail;
  UnixMillis created_at = 0;
  std::optional<UnixMillis> started_at;
  std::optional<UnixMillis> finished_at;
  std::optional<UnixMillis> expires_at;
  int attempt = 0;             // how often it was started
  bool stop_requested = false;
  std::optional<JobProgress> progress;  // while running, from memory
  std::optional<int> queue_position;    // while queued, 1 is next
};

struct JobSummaryPage {
  std::vector<JobRecord> jobs;           // without request and result; newest first
  std::optional<std::string> next_page;  // opaque token
};

struct JobListQuery {
  std::string team;
  std::optional<JobState> state;
  int page_size = 50;
  std::string page_token;  // empty: from the newest
};

// Why the service will not take or change a job; api turns each into one status.
enum class Refusal {
  not_found,        // 404
  finished,         // 409: cancel or stop of a job that has ended otherwise
  still_running,    // 409: delete of a job that has not ended
  team_queue_full,  // 429
  service_full,     // 503
  disk_full,        // 507
  shutting_down,    // 503
  bad_page_token,   // 400
};

}  // namespace bandwright
