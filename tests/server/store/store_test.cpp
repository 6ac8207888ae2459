// What goes into the store comes out, in order, for its team and within its limits.
#include "server/store/store.h"

#include <doctest/doctest.h>

#include <algorithm>
#include <limits>
#include <set>
#include <string>
#include <vector>

#include "tests/server/store/store_fixture.h"

namespace bandwright {

namespace {

std::vector<std::string> list_all(Store& store, const std::string& team, int size,
                                  std::optional<JobState> state = std::nullopt) {
  std::vector<std::string> ids;
  std::optional<std::int64_t> before;
  do {
    auto page = store.list(team, state, size, before);
    REQUIRE(page.ok());
    CHECK(page->jobs.size() <= static_cast<std::size_t>(size));
    for (const JobRecord& job : page->jobs) ids.push_back(job.id);
    before = page->next_before;
  } while (before);
  return ids;
}

}  // namespace

TEST_CASE("a job is read back as it was put in, whatever its bytes") {
  TempDir dir;
  StoreOptions options = test_options();
  options.clock = [] { return UnixMillis{1234567890123}; };
  std::string id;
  const std::string request("{\"a\":\0\xff\xc3\"\n}", 11);
  {
    auto store = open_store(dir.path(), options);
    NewJob job{"north", "päckchen", request, "sha256:abc",
               std::numeric_limits<std::uint64_t>::max()};
    id = insert(*store, job).id;
  }
  auto store = open_store(dir.path(), options);
  const auto found = store->find("north", id);
  REQUIRE(found.ok());
  REQUIRE(found->has_value());
  const JobRecord& job = **found;
  CHECK(job.team == "north");
  CHECK(job.name == "päckchen");
  CHECK(job.request == request);
  CHECK(job.request_digest == "sha256:abc");
  CHECK(job.seed == std::numeric_limits<std::uint64_t>::max());
  CHECK(job.state == JobState::queued);
  CHECK(job.created_at == 1234567890123);
  CHECK(job.attempt == 0);
  CHECK(job.version == 1);
  CHECK_FALSE(job.started_at.has_value());
  CHECK_FALSE(job.expires_at.has_value());
}

TEST_CASE("an empty request and an empty result are kept as such") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord job = insert(*store, {"north", "", "", "", 0});
  CHECK(finish(*store, claim(*store), ""));
  CHECK(get(*store, job).state == JobState::succeeded);
  CHECK(get(*store, job).request.empty());
}

TEST_CASE("ids are jb_ and 26 characters of lower-case base32, never the same twice") {
  TempDir dir;
  auto store = open_store(dir.path());
  std::set<std::string> ids;
  for (int i = 0; i < 200; ++i) {
    const std::string id = insert(*store, new_job("north")).id;
    REQUIRE(id.size() == 29);
    CHECK(id.substr(0, 3) == "jb_");
    CHECK(id.find_first_not_of("abcdefghijklmnopqrstuvwxyz234567", 3) == std::string::npos);
    CHECK(ids.insert(id).second);
  }
}

TEST_CASE("a job of another team is not found, listed, changed or removed") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord job = insert(*store, new_job("north"));
  CHECK_FALSE(store->find("south", job.id)->has_value());
  CHECK(store->cancel("south", job.id, kKept)->effect == Change::Effect::not_found);
  CHECK(store->request_stop("south", job.id)->effect == Change::Effect::not_found);
  CHECK(*store->remove("south", job.id) == Removal::not_found);
  CHECK(list_all(*store, "south", 10).empty());
  CHECK(get(*store, job).version == 1);
}

TEST_CASE("a team's queue takes jobs to its limit and not one more") {
  TempDir dir;
  auto store = open_store(dir.path());
  const QueueLimits limits{3, 5};
  auto outcome = [&](const char* team) { return store->insert(new_job(team), limits)->outcome; };
  for (int i = 0; i < 3; ++i) CHECK(outcome("north") == Insertion::Outcome::stored);
  CHECK(outcome("north") == Insertion::Outcome::team_queue_full);
  for (int i = 0; i < 2; ++i) CHECK(outcome("south") == Insertion::Outcome::stored);
  CHECK(outcome("south") == Insertion::Outcome::total_queue_full);
  CHECK(store->counts()->total == 5);
  claim(*store);  // a running job is no longer in the queue
  CHECK(outcome("south") == Insertion::Outcome::stored);
}

TEST_CASE("every stored change makes the version grow") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord job = insert(*store, new_job("north"));
  std::int64_t last = job.version;
  auto grown = [&] {
    const std::int64_t version = get(*store, job).version;
    return version > std::exchange(last, version);
  };
  Claim run = claim(*store);
  CHECK(grown());
  store->request_stop("north", job.id);
  CHECK(grown());
  store->request_stop("north", job.id);
  CHECK_FALSE(grown());
  store->give_back(job.id, run.lease);
  CHECK(grown());
  run = claim(*store);
  CHECK(grown());
  finish(*store, run);
  CHECK(grown());
}

TEST_CASE("pages hold every job once, newest first, while jobs are added and removed") {
  TempDir dir;
  auto store = open_store(dir.path());
  std::vector<std::string> expected;
  for (int i = 0; i < 25; ++i) {
    expected.insert(expected.begin(), insert(*store, new_job("north")).id);
    insert(*store, new_job("south"));
  }
  CHECK(list_all(*store, "north", 7) == expected);
  CHECK(list_all(*store, "north", 25) == expected);
  CHECK(list_all(*store, "north", 26) == expected);

  std::vector<std::string> seen;
  std::optional<std::int64_t> before;
  do {
    auto page = store->list("north", std::nullopt, 4, before);
    for (const JobRecord& job : page->jobs) seen.push_back(job.id);
    before = page->next_before;
    insert(*store, new_job("north"));  // newer than the first page: not seen
    // The last job shown goes away; the place in the list does not.
    store->cancel("north", seen.back(), kKept);
    store->remove("north", seen.back());
  } while (before);
  CHECK(seen == expected);
}

TEST_CASE("a list shows one state if asked to, and no texts") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord first = insert(*store, new_job("north"));
  insert(*store, new_job("north"));
  finish(*store, claim(*store));
  CHECK(list_all(*store, "north", 10, JobState::succeeded) == std::vector{first.id});
  CHECK(list_all(*store, "north", 1).size() == 2);
  CHECK(list_all(*store, "north", 10, JobState::failed).empty());
  const auto page = store->list("north", JobState::succeeded, 10, std::nullopt);
  CHECK(page->jobs.at(0).request.empty());
  CHECK(page->jobs.at(0).result.empty());
}

TEST_CASE("a job is removed once it has ended and not before") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord job = insert(*store, new_job("north"));
  CHECK(*store->remove("north", job.id) == Removal::still_running);
  const Claim run = claim(*store);
  CHECK(*store->remove("north", job.id) == Removal::still_running);
  finish(*store, run);
  CHECK(*store->remove("north", job.id) == Removal::removed);
  CHECK(*store->remove("north", job.id) == Removal::not_found);
  CHECK(store->counts()->total == 0);
}

TEST_CASE("purge deletes what has expired, a batch at a time, and nothing else") {
  TempDir dir;
  UnixMillis now = 1000;
  StoreOptions options = test_options();
  options.clock = [&] { return now; };
  auto store = open_store(dir.path(), options);
  for (int i = 0; i < 5; ++i) {
    insert(*store, new_job("north"));
    finish(*store, claim(*store));
  }
  const JobRecord waiting = insert(*store, new_job("north"));
  now += kKept.count() - 1;
  CHECK(*store->purge(3) == 0);
  now += 1;
  CHECK(*store->purge(3) == 3);
  CHECK(*store->purge(3) == 2);
  CHECK(*store->purge(3) == 0);
  CHECK(list_all(*store, "north", 10) == std::vector{waiting.id});
}

TEST_CASE("expiry is told in every ended job: its end plus the time results are kept") {
  TempDir dir;
  StoreOptions options = test_options();
  options.clock = [] { return UnixMillis{5000}; };
  auto store = open_store(dir.path(), options);
  const JobRecord a = insert(*store, new_job("north"));
  const JobRecord b = insert(*store, new_job("north"));
  finish(*store, claim(*store));
  store->cancel("north", b.id, kKept);
  for (const JobRecord& job : {get(*store, a), get(*store, b)}) {
    CHECK(job.finished_at == 5000);
    CHECK(job.expires_at == 5000 + kKept.count());
  }
}

TEST_CASE("every state has a name and is found by it") {
  for (JobState state : {JobState::queued, JobState::running, JobState::succeeded, JobState::failed,
                         JobState::cancelled, JobState::expired}) {
    CHECK(job_state_from_name(job_state_name(state)) == state);
  }
  CHECK_FALSE(job_state_from_name("Queued").has_value());
  CHECK_FALSE(job_state_from_name("").has_value());
}

}  // namespace bandwright
