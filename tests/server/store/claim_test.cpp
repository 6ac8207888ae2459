// Whose turn it is, and who may record how a run ended.
#include <doctest/doctest.h>

#include <string>
#include <vector>

#include "server/store/store.h"
#include "tests/server/store/store_fixture.h"

namespace bandwright {

TEST_CASE("inside a team the first come is the first served") {
  TempDir dir;
  auto store = open_store(dir.path());
  std::vector<std::string> in, out;
  for (int i = 0; i < 20; ++i) in.push_back(insert(*store, new_job("north")).id);
  for (int i = 0; i < 20; ++i) out.push_back(claim(*store).job.id);
  CHECK(in == out);
  CHECK_FALSE(store->claim_next(1000)->has_value());
}

TEST_CASE("teams take turns, however long one team's queue is") {
  TempDir dir;
  auto store = open_store(dir.path());
  for (int i = 0; i < 6; ++i) insert(*store, new_job("anna"));
  for (int i = 0; i < 2; ++i) insert(*store, new_job("bert"));
  insert(*store, new_job("carl"));
  std::string order;
  for (int i = 0; i < 9; ++i) order += claim(*store).job.team[0];
  CHECK(order == "abcabaaaa");
}

TEST_CASE("the place in the queue is the number of claims until the job runs") {
  TempDir dir;
  auto store = open_store(dir.path());
  std::vector<JobRecord> jobs;
  for (const char* team :
       {"bert", "bert", "anna", "carl", "anna", "anna", "carl", "bert", "dora"}) {
    jobs.push_back(insert(*store, new_job(team)));
  }
  claim(*store);  // so that the turn is not at the first name
  for (std::size_t done = 1; done < jobs.size(); ++done) {
    for (const JobRecord& job : jobs) {
      if (get(*store, job).state == JobState::queued) {
        CHECK(get(*store, job).queue_position.value() >= 1);
      }
    }
    std::string next;
    for (const JobRecord& job : jobs) {
      if (get(*store, job).queue_position == 1) next += job.id;
    }
    CHECK(claim(*store).job.id == next);
  }
}

TEST_CASE("a team at its running limit is passed over and its turn comes when a run ends") {
  TempDir dir;
  auto store = open_store(dir.path());
  for (int i = 0; i < 3; ++i) insert(*store, new_job("anna"));
  insert(*store, new_job("bert"));
  const Claim first = claim(*store, 1);
  CHECK(first.job.team == "anna");
  CHECK(claim(*store, 1).job.team == "bert");
  CHECK_FALSE(store->claim_next(1)->has_value());
  finish(*store, first);
  CHECK(claim(*store, 1).job.team == "anna");
  CHECK_FALSE(store->claim_next(1)->has_value());
}

TEST_CASE("a claim counts the attempt and tells the start") {
  TempDir dir;
  StoreOptions options = test_options();
  options.clock = [] { return UnixMillis{77}; };
  auto store = open_store(dir.path(), options);
  const JobRecord job = insert(*store, new_job("north"));
  const Claim run = claim(*store);
  CHECK(run.job.attempt == 1);
  CHECK(run.job.started_at == 77);
  CHECK(run.job.state == JobState::running);
  CHECK(run.job.request == job.request);
  CHECK(get(*store, job).state == JobState::running);
}

TEST_CASE("only the current lease records an outcome, and once") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord job = insert(*store, new_job("north"));
  const Claim first = claim(*store);
  REQUIRE(*store->give_back(job.id, first.lease));
  const Claim second = claim(*store);
  CHECK(first.lease != second.lease);
  CHECK_FALSE(finish(*store, first, "stale"));
  CHECK_FALSE(*store->give_back(job.id, first.lease));
  CHECK_FALSE(*store->finish(job.id, "", {true, "none", {}, {}}, kKept));
  CHECK(finish(*store, second, "good"));
  CHECK_FALSE(finish(*store, second, "again"));
  CHECK(get(*store, job).result == "good");
}

TEST_CASE("a job given back has its attempt back and is the next of its team again") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord job = insert(*store, new_job("north"));
  insert(*store, new_job("north"));
  const Claim run = claim(*store);
  REQUIRE(*store->give_back(job.id, run.lease));
  CHECK(get(*store, job).attempt == 0);
  CHECK_FALSE(get(*store, job).started_at.has_value());
  CHECK(claim(*store).job.id == job.id);
}

TEST_CASE("a failed run keeps its code and detail and has no result") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord job = insert(*store, new_job("north"));
  const Claim run = claim(*store);
  CHECK(*store->finish(job.id, run.lease, {false, "ignored", "no_data", "why"}, kKept));
  const JobRecord read = get(*store, job);
  CHECK(read.state == JobState::failed);
  CHECK(read.failure_code == "no_data");
  CHECK(read.failure_detail == "why");
  CHECK(read.result.empty());
}

TEST_CASE("a cancelled job stays cancelled: its run records nothing") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord job = insert(*store, new_job("north"));
  const Claim run = claim(*store);
  CHECK(store->cancel("north", job.id, kKept)->effect == Change::Effect::changed);
  CHECK_FALSE(finish(*store, run));
  CHECK_FALSE(*store->give_back(job.id, run.lease));
  CHECK_FALSE(store->standing(job.id, run.lease)->lease_current);
  CHECK(store->cancel("north", job.id, kKept)->effect == Change::Effect::unchanged);
  CHECK(get(*store, job).state == JobState::cancelled);
  CHECK(get(*store, job).result.empty());
}

TEST_CASE("an ended job can be neither cancelled nor stopped, but a stop that was obeyed repeats") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord job = insert(*store, new_job("north"));
  finish(*store, claim(*store));
  CHECK(store->cancel("north", job.id, kKept)->effect == Change::Effect::finished);
  CHECK(store->request_stop("north", job.id)->effect == Change::Effect::finished);

  const JobRecord stopped = insert(*store, new_job("north"));
  CHECK(store->request_stop("north", stopped.id)->effect == Change::Effect::changed);
  const Claim run = claim(*store);
  CHECK(run.job.stop_requested);
  CHECK(store->standing(run.job.id, run.lease)->stop_requested);
  finish(*store, run);
  CHECK(store->request_stop("north", stopped.id)->effect == Change::Effect::unchanged);
  CHECK(store->cancel("north", stopped.id, kKept)->effect == Change::Effect::finished);
}

}  // namespace bandwright
