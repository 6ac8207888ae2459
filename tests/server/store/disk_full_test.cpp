// A full disk refuses new jobs and nothing else, and it passes.
#include <doctest/doctest.h>
#include <sys/mount.h>

#include <fstream>
#include <string>
#include <vector>

#include "server/store/store.h"
#include "tests/server/store/store_fixture.h"

namespace bandwright {

namespace {

constexpr std::int64_t kMiB = 1 << 20;

NewJob large_job() {
  return {"north", "large", std::string(200'000, 'r'), "sha256:0", 1};
}

// Takes jobs until there is no room; returns them.
std::vector<JobRecord> fill(Store& store) {
  std::vector<JobRecord> jobs;
  for (;;) {
    auto inserted = store.insert(large_job(), kRoomy);
    if (!inserted.ok()) {
      CHECK(inserted.error().kind == StoreFault::Kind::disk_full);
      return jobs;
    }
    jobs.push_back(std::move(inserted->job));
    REQUIRE(jobs.size() < 1000);
  }
}

// Everything that ends a job works on a full store, and then there is room again.
void check_recovery(Store& store, const std::vector<JobRecord>& jobs) {
  REQUIRE(jobs.size() >= 4);
  const Claim first = claim(store);
  CHECK(finish(store, first, std::string(100'000, 'x')));
  const Claim second = claim(store);
  CHECK(*store.give_back(second.job.id, second.lease));
  CHECK(get(store, jobs[0]).result.size() == 100'000);
  for (std::size_t i = 1; i < jobs.size(); ++i) {
    CHECK(store.cancel("north", jobs[i].id, Store::Kept(0))->effect == Change::Effect::changed);
  }
  CHECK(*store.purge(1000) == static_cast<int>(jobs.size()) - 1);
  insert(store, large_job());
}

// A small disk of its own, where the system permits one.
class SmallDisk {
 public:
  SmallDisk() { mounted_ = mount("tmpfs", dir_.path().c_str(), "tmpfs", 0, "size=4m") == 0; }
  ~SmallDisk() {
    if (mounted_) umount2(dir_.path().c_str(), MNT_DETACH);
  }
  SmallDisk(const SmallDisk&) = delete;
  SmallDisk& operator=(const SmallDisk&) = delete;

  bool mounted() const { return mounted_; }
  const std::filesystem::path& path() const { return dir_.path(); }

 private:
  TempDir dir_;
  bool mounted_ = false;
};

}  // namespace

TEST_CASE("a store at its largest size takes no job, ends those it has, and takes jobs again") {
  TempDir dir;
  StoreOptions options = test_options();
  options.max_bytes = 3 * kMiB;
  options.ballast_bytes = kMiB;
  auto store = open_store(dir.path(), options);
  check_recovery(*store, fill(*store));
}

TEST_CASE("on a full disk the ballast lets jobs end, and comes back when there is room") {
  SmallDisk disk;
  if (!disk.mounted()) {
    MESSAGE("skipped: no disk may be mounted here");
    return;
  }
  StoreOptions options = test_options();
  options.ballast_bytes = kMiB;
  auto store = open_store(disk.path(), options);
  const auto ballast = disk.path() / "ballast";
  REQUIRE(std::filesystem::exists(ballast));
  std::vector<JobRecord> jobs = fill(*store);
  CHECK(std::filesystem::exists(ballast));  // refusing a job costs nothing
  // Something else takes the last byte.
  {
    std::ofstream other(disk.path() / "other");
    other << std::string(4 * kMiB, 'o');
    other.flush();
  }
  for (const JobRecord& job : jobs) {
    CHECK(store->cancel("north", job.id, Store::Kept(0))->effect == Change::Effect::changed);
  }
  CHECK_FALSE(std::filesystem::exists(ballast));
  std::filesystem::remove(disk.path() / "other");
  CHECK(store->purge(1000).ok());
  insert(*store, large_job());
  for (const JobRecord& job : jobs) CHECK_FALSE(store->find("north", job.id)->has_value());
}

TEST_CASE("space that purged jobs leave inside the file counts as free") {
  TempDir dir;
  auto store = open_store(dir.path());
  const JobRecord job = insert(*store, {"north", "", std::string(20 * kMiB, 'r'), "", 0});
  const std::uint64_t before = store->free_bytes();
  store->cancel("north", job.id, Store::Kept(0));
  CHECK(*store->purge(10) == 1);
  CHECK(store->free_bytes() > before);
}

}  // namespace bandwright
