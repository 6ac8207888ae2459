// Who may open the store, and what a new process finds there.
#include <doctest/doctest.h>
#include <fcntl.h>
#include <signal.h>
#include <sqlite3.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <unistd.h>

#include <fstream>
#include <string>

#include "server/store/store.h"
#include "tests/server/store/store_fixture.h"

namespace bandwright {

namespace {

StoreFault::Kind fault_of_opening(const std::filesystem::path& dir) {
  const auto opened = Store::open(dir, test_options());
  REQUIRE_FALSE(opened.ok());
  CHECK_FALSE(opened.error().detail.empty());
  return opened.error().kind;
}

void run_sql(const std::filesystem::path& file, const char* sql) {
  sqlite3* connection = nullptr;
  REQUIRE(sqlite3_open(file.c_str(), &connection) == SQLITE_OK);
  CHECK(sqlite3_exec(connection, sql, nullptr, nullptr, nullptr) == SQLITE_OK);
  sqlite3_close(connection);
}

}  // namespace

TEST_CASE("a store that another process has open is locked until that process dies") {
  TempDir dir;
  int ready[2];
  REQUIRE(pipe(ready) == 0);
  const pid_t holder = fork();
  REQUIRE(holder >= 0);
  if (holder == 0) {
    const auto held = Store::open(dir.path(), test_options());
    const char answer = held.ok() ? 'y' : 'n';
    if (write(ready[1], &answer, 1) == 1) pause();
    _exit(1);
  }
  char answer = 0;
  REQUIRE(read(ready[0], &answer, 1) == 1);
  CHECK(answer == 'y');
  CHECK(fault_of_opening(dir.path()) == StoreFault::Kind::locked);
  kill(holder, SIGKILL);
  waitpid(holder, nullptr, 0);
  close(ready[0]);
  close(ready[1]);
  insert(*open_store(dir.path()), new_job("north"));
}

TEST_CASE(
    "a second store in the same process is refused and does not loosen the first one's lock") {
  TempDir dir;
  auto store = open_store(dir.path());
  CHECK(fault_of_opening(dir.path()) == StoreFault::Kind::locked);
  const pid_t other = fork();
  REQUIRE(other >= 0);
  if (other == 0) {
    // Asks the system, not the library: a forked copy of that knows the lock anyway.
    const int file = open((dir.path() / "jobs.sqlite3").c_str(), O_RDWR);
    struct flock lock {};
    lock.l_type = F_WRLCK;
    const bool asked = file >= 0 && fcntl(file, F_GETLK, &lock) == 0;
    _exit(asked && lock.l_type != F_UNLCK ? 0 : 1);
  }
  int status = 0;
  waitpid(other, &status, 0);
  CHECK(WIFEXITED(status));
  CHECK(WEXITSTATUS(status) == 0);
  insert(*store, new_job("north"));
}

TEST_CASE("a store of a newer version is refused and left as it is") {
  TempDir dir;
  const auto file = dir.path() / "jobs.sqlite3";
  { auto store = open_store(dir.path()); }
  run_sql(file, "PRAGMA user_version=99");
  CHECK(fault_of_opening(dir.path()) == StoreFault::Kind::newer_schema);
  run_sql(file, "PRAGMA user_version=1");
  { auto store = open_store(dir.path()); }
}

TEST_CASE("a database of something else and a file that is none are refused") {
  TempDir dir;
  run_sql(dir.path() / "jobs.sqlite3", "CREATE TABLE stamps (value)");
  CHECK(fault_of_opening(dir.path()) == StoreFault::Kind::unusable);
  TempDir other;
  std::ofstream(other.path() / "jobs.sqlite3") << std::string(5000, 'x');
  CHECK(fault_of_opening(other.path()) == StoreFault::Kind::unusable);
}

TEST_CASE("a folder that cannot be made is a fault, not an exception") {
  TempDir dir;
  std::ofstream(dir.path() / "plain") << "a file";
  CHECK(fault_of_opening(dir.path() / "plain" / "data") == StoreFault::Kind::unusable);
}

TEST_CASE("only the owner can read what the store writes") {
  TempDir dir;
  const auto data = dir.path() / "new" / "data";
  auto store = open_store(data);
  insert(*store, new_job("north"));
  struct stat found {};
  for (const char* name : {"jobs.sqlite3", "jobs.sqlite3-wal"}) {
    REQUIRE(stat((data / name).c_str(), &found) == 0);
    CHECK((found.st_mode & 077) == 0);
  }
  REQUIRE(stat(data.c_str(), &found) == 0);
  CHECK((found.st_mode & 077) == 0);
}

TEST_CASE("jobs an ended process left running are queued again with their attempt counted") {
  TempDir dir;
  JobRecord job;
  {
    auto store = open_store(dir.path());
    job = insert(*store, new_job("north"));
    claim(*store);
  }
  auto store = open_store(dir.path());
  CHECK(get(*store, job).state == JobState::running);
  const auto recovery = store->recover(3, kKept);
  CHECK(recovery->queued_again == 1);
  CHECK(recovery->crashed == 0);
  CHECK(get(*store, job).state == JobState::queued);
  CHECK(claim(*store).job.attempt == 2);
}

TEST_CASE("a job whose third attempt crashes has failed with code crashed") {
  TempDir dir;
  JobRecord job;
  std::string lease;
  for (int crash = 1; crash <= 3; ++crash) {
    auto store = open_store(dir.path());
    if (crash == 1) job = insert(*store, new_job("north"));
    CHECK(store->recover(3, kKept)->crashed == 0);
    const Claim run = claim(*store);
    CHECK(run.job.attempt == crash);
    lease = run.lease;
  }
  auto store = open_store(dir.path());
  CHECK(store->recover(3, kKept)->crashed == 1);
  const JobRecord read = get(*store, job);
  CHECK(read.state == JobState::failed);
  CHECK(read.failure_code == "crashed");
  CHECK(read.expires_at.has_value());
  CHECK_FALSE(*store->finish(job.id, lease, {true, "late", {}, {}}, kKept));
  CHECK_FALSE(store->claim_next(1000)->has_value());
}

}  // namespace bandwright
