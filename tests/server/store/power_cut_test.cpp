// What the store has answered survives a loss of power at any moment.
#include <doctest/doctest.h>

#include <map>
#include <random>
#include <string>

#include "server/store/store.h"
#include "tests/server/store/memory_disk.h"
#include "tests/server/store/store_fixture.h"

namespace bandwright {

namespace {

// What has been answered of each job, by id.
struct Promised {
  JobState state = JobState::queued;
  std::string result;
};

struct Losses {
  int cuts = 0;
  int promises = 0;
  int lost = 0;
  int unreadable = 0;
};

StoreOptions options_on(const MemoryDisk& disk) {
  StoreOptions options = test_options();
  options.vfs = disk.name();
  options.on_fatal = [](const StoreFault&) {};  // the power cut itself
  return options;
}

// Works until an operation fails. A running job may also be found queued: claims are not promises.
void work_until_cut(Store& store, std::mt19937_64& random, std::map<std::string, Promised>& jobs) {
  for (;;) {
    const std::string filler(random() % 9000, 'r');
    const auto inserted = store.insert({"north", "job", filler, "sha256:0", 1}, kRoomy);
    if (!inserted.ok()) return;
    jobs[inserted->job.id] = {};
    if (random() % 3 == 0) continue;
    const auto claimed = store.claim_next(1 << 20);
    if (!claimed.ok()) return;
    const std::string& id = (*claimed)->job.id;
    if (random() % 3 == 0) {
      // Whether an unanswered change was made is not known.
      jobs[id].state = JobState::running;
      if (!store.cancel("north", id, kKept).ok()) return;
      jobs[id].state = JobState::cancelled;
    } else {
      jobs[id].state = JobState::running;
      if (!store.finish(id, (*claimed)->lease, {true, filler, {}, {}}, kKept).ok()) return;
      jobs[id] = {JobState::succeeded, filler};
    }
  }
}

void compare(Store& store, const std::map<std::string, Promised>& jobs, Losses& losses) {
  for (const auto& [id, promised] : jobs) {
    ++losses.promises;
    const auto found = store.find("north", id);
    const bool kept = found.ok() && *found &&
                      (promised.state == JobState::queued || promised.state == JobState::running ||
                       ((*found)->state == promised.state && (*found)->result == promised.result));
    if (!kept) ++losses.lost;
  }
}

// Loses power `cuts` times, on a fresh disk after every eight.
Losses cut_power(int cuts, bool syncs_are_lies) {
  Losses losses;
  while (losses.cuts < cuts) {
    TempDir dir;
    MemoryDisk disk("memory-disk");
    disk.syncs_are_lies = syncs_are_lies;
    std::mt19937_64 random(static_cast<std::uint64_t>(losses.cuts));
    std::map<std::string, Promised> jobs;
    for (const int end = losses.cuts + 8; losses.cuts < end;) {
      if (random() % 4 == 0) {  // also while the store is made or recovers from the cut before
        disk.cut_power_after(1 + static_cast<int>(random() % 30));
        Store::open(dir.path(), options_on(disk));
        disk.restore_power(random);
        ++losses.cuts;
      }
      {
        const auto opened = Store::open(dir.path(), options_on(disk));
        if (!opened.ok()) {
          ++losses.unreadable;
          losses.cuts = end;
          break;
        }
        compare(**opened, jobs, losses);
        disk.cut_power_after(1 + static_cast<int>(random() % (random() % 8 ? 200 : 1500)));
        work_until_cut(**opened, random, jobs);
      }
      disk.restore_power(random);
      ++losses.cuts;
    }
  }
  return losses;
}

}  // namespace

TEST_CASE("no acknowledged job or outcome is lost when the power goes") {
  const Losses losses = cut_power(1000, false);
  CHECK(losses.promises > 1000);
  CHECK(losses.lost == 0);
  CHECK(losses.unreadable == 0);
}

TEST_CASE("on a disk that only pretends to sync jobs are lost, so the loss of power is real") {
  const Losses losses = cut_power(100, true);
  CHECK(losses.lost + losses.unreadable > 0);
}

TEST_CASE("a failed sync is fatal: told once, never tried again") {
  TempDir dir;
  MemoryDisk disk("memory-disk");
  int told = 0;
  StoreOptions options = options_on(disk);
  options.on_fatal = [&](const StoreFault& fault) {
    CHECK(fault.kind == StoreFault::Kind::failed);
    ++told;
  };
  auto store = open_store(dir.path(), options);
  const JobRecord job = insert(*store, new_job("north"));
  disk.syncs_fail = true;
  CHECK(store->insert(new_job("north"), kRoomy).error().kind == StoreFault::Kind::failed);
  disk.syncs_fail = false;
  CHECK(store->insert(new_job("north"), kRoomy).error().kind == StoreFault::Kind::failed);
  CHECK(store->find("north", job.id).error().kind == StoreFault::Kind::failed);
  CHECK(told == 1);
}

TEST_CASE("a sync that fails while the log is moved into the file is not hidden") {
  TempDir dir;
  MemoryDisk disk("memory-disk");
  int told = 0;
  StoreOptions options = options_on(disk);
  options.on_fatal = [&](const StoreFault&) { ++told; };
  auto store = open_store(dir.path(), options);
  // One job whose pages fill the log: its commit needs one sync of the log, the checkpoint more.
  const NewJob large{"north", "large", std::string(8 << 20, 'r'), "sha256:0", 1};
  disk.fail_sync_after(1);
  CHECK(store->insert(large, kRoomy).error().kind == StoreFault::Kind::failed);
  CHECK(told == 1);
}

}  // namespace bandwright
