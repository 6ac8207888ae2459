// The store against a model of it: a job's life in a few lines, driven by chance.
#include <doctest/doctest.h>

#include <map>
#include <random>
#include <string>
#include <vector>

#include "server/store/store.h"
#include "tests/server/store/store_fixture.h"

namespace bandwright {

namespace {

struct ModelJob {
  std::string team;
  JobState state = JobState::queued;
  int attempt = 0;
  bool stop_requested = false;
  std::string lease;  // the current one, while running
};

class Simulation {
 public:
  explicit Simulation(std::uint64_t seed) : random_(seed) { reopen(); }

  void step() {
    switch (random_() % 10) {
      case 0:
      case 1:
        return submit();
      case 2:
      case 3:
        return claim_one();
      case 4:
        return finish_one();
      case 5:
        return give_one_back();
      case 6:
        return cancel_one();
      case 7:
        return stop_one();
      case 8:
        return remove_one();
      default:
        if (random_() % 10 == 0) crash();
    }
  }

  void compare_all() {
    for (const auto& [id, expected] : jobs_) {
      const auto found = store_->find(expected.team, id);
      REQUIRE(found.ok());
      REQUIRE(found->has_value());
      CHECK((*found)->state == expected.state);
      CHECK((*found)->attempt == expected.attempt);
      CHECK((*found)->stop_requested == expected.stop_requested);
      CHECK((*found)->finished_at.has_value() == is_final(expected.state));
      CHECK((*found)->queue_position.has_value() == (expected.state == JobState::queued));
    }
    CHECK(store_->counts()->total == static_cast<std::int64_t>(jobs_.size()));
  }

 private:
  using Entry = std::map<std::string, ModelJob>::value_type;

  void reopen() {
    store_.reset();
    store_ = open_store(dir_.path());
  }
  Entry* any() {
    if (jobs_.empty()) return nullptr;
    return &*std::next(jobs_.begin(), static_cast<std::ptrdiff_t>(random_() % jobs_.size()));
  }
  // A lease that was handed out at some time, often not the job's current one.
  std::string any_lease(const ModelJob& job) {
    if (leases_.empty() || random_() % 2) return job.lease.empty() ? "none" : job.lease;
    return leases_[random_() % leases_.size()];
  }
  static bool current(const ModelJob& job, const std::string& lease) {
    return job.state == JobState::running && job.lease == lease;
  }

  void submit() {
    const std::string team(1, static_cast<char>('a' + random_() % 3));
    jobs_[insert(*store_, new_job(team)).id] = ModelJob{team, JobState::queued, 0, false, {}};
  }
  void claim_one() {
    constexpr int kRunningPerTeam = 2;
    std::map<std::string, int> running, queued;
    for (const auto& [id, job] : jobs_) {
      if (job.state == JobState::running) ++running[job.team];
      if (job.state == JobState::queued) ++queued[job.team];
    }
    bool possible = false;
    for (const auto& [team, count] : queued) possible |= running[team] < kRunningPerTeam;
    const auto claimed = store_->claim_next(kRunningPerTeam);
    REQUIRE(claimed.ok());
    REQUIRE(claimed->has_value() == possible);
    if (!possible) return;
    ModelJob& job = jobs_.at((*claimed)->job.id);
    CHECK(job.state == JobState::queued);
    CHECK(running[job.team] < kRunningPerTeam);
    job.state = JobState::running;
    ++job.attempt;
    job.lease = (*claimed)->lease;
    leases_.push_back(job.lease);
  }
  void finish_one() {
    Entry* entry = any();
    if (!entry) return;
    auto& [id, job] = *entry;
    const std::string lease = any_lease(job);
    const bool good = random_() % 2;
    const auto finished = store_->finish(id, lease, {good, "{}", "code", "detail"}, kKept);
    REQUIRE(finished.ok());
    CHECK(*finished == current(job, lease));
    if (*finished) job.state = good ? JobState::succeeded : JobState::failed;
  }
  void give_one_back() {
    Entry* entry = any();
    if (!entry) return;
    auto& [id, job] = *entry;
    const std::string lease = any_lease(job);
    const auto given = store_->give_back(id, lease);
    REQUIRE(given.ok());
    CHECK(*given == current(job, lease));
    if (!*given) return;
    job.state = JobState::queued;
    --job.attempt;
  }
  void cancel_one() {
    Entry* entry = any();
    if (!entry) return;
    auto& [id, job] = *entry;
    const auto change = store_->cancel(job.team, id, kKept);
    REQUIRE(change.ok());
    const Change::Effect expected = !is_final(job.state)               ? Change::Effect::changed
                                    : job.state == JobState::cancelled ? Change::Effect::unchanged
                                                                       : Change::Effect::finished;
    CHECK(change->effect == expected);
    if (!is_final(job.state)) job.state = JobState::cancelled;
  }
  void stop_one() {
    Entry* entry = any();
    if (!entry) return;
    auto& [id, job] = *entry;
    const auto change = store_->request_stop(job.team, id);
    REQUIRE(change.ok());
    CHECK((change->effect == Change::Effect::changed) ==
          (!is_final(job.state) && !job.stop_requested));
    if (!is_final(job.state)) job.stop_requested = true;
  }
  void remove_one() {
    Entry* entry = any();
    if (!entry) return;
    const auto removal = store_->remove(entry->second.team, entry->first);
    REQUIRE(removal.ok());
    CHECK((*removal == Removal::removed) == is_final(entry->second.state));
    if (*removal == Removal::removed) jobs_.erase(entry->first);
  }
  void crash() {
    constexpr int kMaxAttempts = 3;
    reopen();
    REQUIRE(store_->recover(kMaxAttempts, kKept).ok());
    for (auto& [id, job] : jobs_) {
      if (job.state != JobState::running) continue;
      job.state = job.attempt >= kMaxAttempts ? JobState::failed : JobState::queued;
    }
  }

  TempDir dir_;
  std::mt19937_64 random_;
  std::map<std::string, ModelJob> jobs_;
  std::vector<std::string> leases_;
  std::unique_ptr<Store> store_;
};

}  // namespace

TEST_CASE("the store agrees with its model through any order of operations and crashes") {
  for (std::uint64_t seed = 1; seed <= 5; ++seed) {
    CAPTURE(seed);
    Simulation simulation(seed);
    for (int step = 1; step <= 400; ++step) {
      simulation.step();
      if (step % 40 == 0) simulation.compare_all();
    }
  }
}

}  // namespace bandwright
