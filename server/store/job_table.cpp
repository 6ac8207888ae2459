#include "server/store/job_table.h"

#include <sqlite3.h>

namespace bandwright {

namespace {

const std::string kSelectJobs =
    "SELECT number, id, team, name, state, version, request_digest, seed, failure_code, "
    "failure_detail, created_at, started_at, finished_at, expires_at, attempt, stop_requested "
    "FROM jobs WHERE ";

NumberedJob read_job(const Rows& rows) {
  NumberedJob read;
  read.number = rows.integer(0);
  JobRecord& job = read.job;
  job.id = rows.text(1);
  job.team = rows.text(2);
  job.name = rows.text(3);
  const std::optional<JobState> state = job_state_from_name(rows.text(4));
  if (!state) throw SqlError{SQLITE_CORRUPT, "a job is in no known state"};
  job.state = *state;
  job.version = rows.integer(5);
  job.request_digest = rows.text(6);
  job.seed = static_cast<std::uint64_t>(rows.integer(7));
  job.failure_code = rows.text(8);
  job.failure_detail = rows.text(9);
  job.created_at = rows.integer(10);
  job.started_at = rows.maybe_integer(11);
  job.finished_at = rows.maybe_integer(12);
  job.expires_at = rows.maybe_integer(13);
  job.attempt = static_cast<int>(rows.integer(14));
  job.stop_requested = rows.integer(15) != 0;
  return read;
}

std::string first_text(Rows rows) {
  return rows.next() ? rows.text(0) : std::string();
}
std::int64_t first_integer(Rows rows) {
  return rows.next() ? rows.integer(0) : 0;
}
std::optional<std::int64_t> maybe_first_integer(Rows rows) {
  return rows.next() ? rows.maybe_integer(0) : std::nullopt;
}

}  // namespace

JobTable::JobTable(Database& database)
    : insert_job_(database.connection(),
                  "INSERT INTO jobs (id, team, name, state, request_digest, seed, created_at) "
                  "VALUES (?1, ?2, ?3, 'queued', ?4, ?5, ?6)"),
      insert_request_(database.connection(),
                      "INSERT INTO requests SELECT number, ?2 FROM jobs WHERE id = ?1"),
      insert_result_(database.connection(), "INSERT INTO results VALUES (?1, ?2)"),
      // Teams take turns in the order of their names, beginning after the one served last.
      next_queued_(database.connection(),
                   "SELECT min(number) FROM jobs AS waiting WHERE state = 'queued' GROUP BY team "
                   "HAVING (SELECT count(*) FROM jobs WHERE state = 'running' AND "
                   "team = waiting.team) < ?1 ORDER BY team <= ?2, team LIMIT 1"),
      start_(database.connection(),
             "UPDATE jobs SET state = 'running', version = version + 1, attempt = attempt + 1, "
             "started_at = ?2, lease = ?3 WHERE number = ?1 AND state = 'queued'"),
      end_run_(database.connection(),
               "UPDATE jobs SET state = ?3, version = version + 1, finished_at = ?4, "
               "expires_at = ?5, lease = NULL WHERE id = ?1 AND lease = ?2 AND "
               "state = 'running' RETURNING number"),
      set_failure_(database.connection(),
                   "UPDATE jobs SET failure_code = ?2, failure_detail = ?3 WHERE number = ?1"),
      give_back_(database.connection(),
                 "UPDATE jobs SET state = 'queued', version = version + 1, attempt = attempt - 1, "
                 "started_at = NULL, lease = NULL WHERE id = ?1 AND lease = ?2 AND "
                 "state = 'running'"),
      fail_crashed_(database.connection(),
                    "UPDATE jobs SET state = 'failed', version = version + 1, finished_at = ?2, "
                    "expires_at = ?3, lease = NULL, failure_code = 'crashed', failure_detail = "
                    "'The service ended unexpectedly during every attempt to run this job.' "
                    "WHERE state = 'running' AND attempt >= ?1"),
      queue_again_(database.connection(),
                   "UPDATE jobs SET state = 'queued', version = version + 1, started_at = NULL, "
                   "lease = NULL WHERE state = 'running'"),
      cancel_(database.connection(),
              "UPDATE jobs SET state = 'cancelled', version = version + 1, finished_at = ?2, "
              "expires_at = ?3, lease = NULL WHERE number = ?1 AND state IN ('queued', "
              "'running')"),
      mark_stop_(database.connection(),
                 "UPDATE jobs SET stop_requested = 1, version = version + 1 WHERE number = ?1 AND "
                 "stop_requested = 0 AND state IN ('queued', 'running')"),
      erase_job_(database.connection(), "DELETE FROM jobs WHERE number = ?1"),
      erase_request_(database.connection(), "DELETE FROM requests WHERE number = ?1"),
      erase_result_(database.connection(), "DELETE FROM results WHERE number = ?1"),
      find_(database.connection(), kSelectJobs + "id = ?1 AND team = ?2"),
      by_number_(database.connection(), kSelectJobs + "number = ?1"),
      request_(database.connection(), "SELECT body FROM requests WHERE number = ?1"),
      result_(database.connection(), "SELECT body FROM results WHERE number = ?1"),
      lease_(database.connection(),
             "SELECT stop_requested FROM jobs WHERE id = ?1 AND lease = ?2 AND "
             "state = 'running'"),
      page_(database.connection(),
            kSelectJobs + "team = ?1 AND number < ?2 ORDER BY number DESC LIMIT ?3"),
      page_in_state_(database.connection(), kSelectJobs +
                                                "team = ?1 AND number < ?2 AND state = ?4 "
                                                "ORDER BY number DESC LIMIT ?3"),
      expired_(database.connection(),
               "SELECT number FROM jobs WHERE expires_at <= ?1 ORDER BY expires_at LIMIT ?2"),
      queued_in_(database.connection(),
                 "SELECT count(*) FROM jobs WHERE state = 'queued' AND team = ?1"),
      count_(database.connection(), "SELECT count(*) FROM jobs WHERE state = ?1"),
      count_all_(database.connection(), "SELECT count(*) FROM jobs"),
      queues_(database.connection(),
              "SELECT team, count(*) FROM jobs WHERE state = 'queued' GROUP BY team"),
      place_(database.connection(),
             "SELECT count(*) FROM jobs WHERE state = 'queued' AND team = ?1 AND number <= ?2") {}

void JobTable::insert(const std::string& id, const NewJob& job, UnixMillis now) {
  insert_job_.run(id, job.team, job.name, job.request_digest, static_cast<std::int64_t>(job.seed),
                  now);
  insert_request_.run(id, Blob{job.request});
}

std::optional<std::int64_t> JobTable::next_queued(int running_per_team,
                                                  const std::string& last_team) {
  return maybe_first_integer(next_queued_.query(std::int64_t{running_per_team}, last_team));
}

void JobTable::start(std::int64_t number, const std::string& lease, UnixMillis now) {
  start_.run(number, now, lease);
}

std::optional<std::int64_t> JobTable::end_run(const std::string& id, const std::string& lease,
                                              JobState state, UnixMillis now, UnixMillis expires) {
  return maybe_first_integer(end_run_.query(id, lease, job_state_name(state), now, expires));
}

void JobTable::set_failure(std::int64_t number, const std::string& code,
                           const std::string& detail) {
  set_failure_.run(number, code, detail);
}

void JobTable::set_result(std::int64_t number, const std::string& result) {
  insert_result_.run(number, Blob{result});
}

bool JobTable::give_back(const std::string& id, const std::string& lease) {
  return give_back_.run(id, lease) == 1;
}

int JobTable::fail_crashed(int max_attempts, UnixMillis now, UnixMillis expires) {
  return fail_crashed_.run(std::int64_t{max_attempts}, now, expires);
}

int JobTable::queue_again() {
  return queue_again_.run();
}

bool JobTable::cancel(std::int64_t number, UnixMillis now, UnixMillis expires) {
  return cancel_.run(number, now, expires) == 1;
}

bool JobTable::mark_stop(std::int64_t number) {
  return mark_stop_.run(number) == 1;
}

void JobTable::erase(std::int64_t number) {
  erase_job_.run(number);
  erase_request_.run(number);
  erase_result_.run(number);
}

std::optional<NumberedJob> JobTable::find(const std::string& team, const std::string& id) {
  Rows rows = find_.query(id, team);
  if (!rows.next()) return std::nullopt;
  return read_job(rows);
}

NumberedJob JobTable::with_texts(std::int64_t number) {
  Rows rows = by_number_.query(number);
  if (!rows.next()) throw SqlError{SQLITE_CORRUPT, "a job has vanished inside a transaction"};
  NumberedJob read = read_job(rows);
  read.job.request = first_text(request_.query(number));
  read.job.result = first_text(result_.query(number));
  return read;
}

std::optional<bool> JobTable::lease_standing(const std::string& id, const std::string& lease) {
  Rows rows = lease_.query(id, lease);
  if (!rows.next()) return std::nullopt;
  return rows.integer(0) != 0;
}

std::vector<NumberedJob> JobTable::page(const std::string& team, std::optional<JobState> state,
                                        std::int64_t before, int size) {
  std::vector<NumberedJob> jobs;
  Rows rows = state ? page_in_state_.query(team, before, std::int64_t{size}, job_state_name(*state))
                    : page_.query(team, before, std::int64_t{size});
  while (rows.next()) jobs.push_back(read_job(rows));
  return jobs;
}

std::vector<std::int64_t> JobTable::expired(UnixMillis now, int batch) {
  std::vector<std::int64_t> numbers;
  Rows rows = expired_.query(now, std::int64_t{batch});
  while (rows.next()) numbers.push_back(rows.integer(0));
  return numbers;
}

std::int64_t JobTable::queued_in(const std::string& team) {
  return first_integer(queued_in_.query(team));
}

std::int64_t JobTable::count(JobState state) {
  return first_integer(count_.query(job_state_name(state)));
}

std::int64_t JobTable::count_all() {
  return first_integer(count_all_.query());
}

std::vector<TeamQueue> JobTable::queues() {
  std::vector<TeamQueue> queues;
  Rows rows = queues_.query();
  while (rows.next()) queues.push_back({rows.text(0), rows.integer(1)});
  return queues;
}

std::int64_t JobTable::place_in_team(const std::string& team, std::int64_t number) {
  return first_integer(place_.query(team, number));
}

}  // namespace bandwright
