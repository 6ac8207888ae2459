#include "server/store/store.h"

#include <fcntl.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <cstdlib>
#include <limits>
#include <system_error>
#include <type_traits>
#include <utility>

#include "server/store/ballast.h"
#include "server/store/database.h"
#include "server/store/guarded.h"
#include "server/store/job_table.h"
#include "server/store/random_id.h"
#include "server/store/schema.h"

namespace bandwright {

namespace {

// What an operation may use up: jobs are taken only while there is room to spare, all else may
// draw on the reserve.
enum class Room { spare, reserve };

StoreFault fault_while_opening(const SqlError& error) {
  if (error.busy()) return {StoreFault::Kind::locked, "another process has the store open"};
  if (error.disk_full()) return {StoreFault::Kind::disk_full, error.message};
  return {StoreFault::Kind::unusable, error.message};
}

// A new name in a folder lasts only once the folder is synced.
void sync_folder(const std::filesystem::path& folder) {
  const int handle = ::open(folder.c_str(), O_RDONLY | O_DIRECTORY | O_CLOEXEC);
  const bool synced = handle >= 0 && fsync(handle) == 0;
  const int reason = errno;
  if (handle >= 0) ::close(handle);
  if (!synced) throw std::system_error(reason, std::generic_category(), folder.string());
}

void prepare_folder(const std::filesystem::path& folder) {
  if (std::filesystem::is_directory(folder)) return;
  std::filesystem::create_directories(folder);
  std::filesystem::permissions(folder, std::filesystem::perms::owner_all);
  sync_folder(std::filesystem::absolute(folder).lexically_normal().parent_path());
}

}  // namespace

UnixMillis system_clock_now() {
  return std::chrono::duration_cast<std::chrono::milliseconds>(
             std::chrono::system_clock::now().time_since_epoch())
      .count();
}

void exit_on_store_failure(const StoreFault&) {
  std::_Exit(74);
}

struct Store::Core {
  struct Guts {
    Guts(const std::filesystem::path& file, const std::string& vfs) : database(file, vfs) {}

    Database database;
    std::optional<JobTable> jobs;  // once the schema is there
    std::optional<Ballast> ballast;
    std::string last_team;  // the team served last
    std::optional<StoreFault> failed;
  };

  Core(const std::filesystem::path& dir, StoreOptions given)
      : data_dir(dir), options(std::move(given)), guts(dir / "jobs.sqlite3", options.vfs) {}

  template <class Work>
  auto run(Room room, Work work) -> Result<std::invoke_result_t<Work, Guts&>, StoreFault>;
  template <class Work>
  auto attempt(Guts& g, Room room, const Work& work) -> std::invoke_result_t<Work, Guts&>;
  std::int64_t size_limit(Room room) const {
    return options.max_bytes +
           (room == Room::reserve ? static_cast<std::int64_t>(options.ballast_bytes) : 0);
  }

  std::filesystem::path data_dir;
  StoreOptions options;
  Guarded<Guts> guts;
};

// One transaction. A full disk costs the ballast and a second try, if `room` allows.
template <class Work>
auto Store::Core::attempt(Guts& g, Room room, const Work& work)
    -> std::invoke_result_t<Work, Guts&> {
  auto transact = [&] {
    Transaction transaction(g.database);
    auto value = work(g);
    transaction.commit();
    return value;
  };
  auto transact_with_ballast = [&] {
    try {
      return transact();
    } catch (const SqlError& error) {
      if (!error.disk_full() || room == Room::spare || !g.ballast->drop()) throw;
      return transact();
    }
  };
  g.database.limit_size(size_limit(room));
  auto value = transact_with_ballast();
  if (!g.database.checkpoint_when_due() && g.ballast->drop()) g.database.checkpoint_when_due();
  return value;
}

template <class Work>
auto Store::Core::run(Room room, Work work)
    -> Result<std::invoke_result_t<Work, Guts&>, StoreFault> {
  StoreFault fault;
  {
    auto g = guts.lock();
    if (g->failed) return *g->failed;
    try {
      return attempt(*g, room, work);
    } catch (const SqlError& error) {
      if (error.disk_full()) return StoreFault{StoreFault::Kind::disk_full, error.message};
      fault = {StoreFault::Kind::failed, error.message};
    }
    g->failed = fault;
  }
  options.on_fatal(fault);
  return fault;
}

Store::Store(std::unique_ptr<Core> core) : core_(std::move(core)) {}
Store::~Store() = default;

Store::Answer<std::unique_ptr<Store>> Store::open(const std::filesystem::path& data_dir,
                                                  StoreOptions options) {
  try {
    prepare_folder(data_dir);
    auto core = std::make_unique<Core>(data_dir, std::move(options));
    {
      auto g = core->guts.lock();
      switch (check_schema(g->database)) {
        case SchemaCheck::newer:
          return StoreFault{StoreFault::Kind::newer_schema,
                            "the store was written by a newer version of this program"};
        case SchemaCheck::foreign:
          return StoreFault{StoreFault::Kind::unusable, "the file is not a job store"};
        case SchemaCheck::usable:
          break;
      }
      g->database.make_durable();
      migrate(g->database);
      g->jobs.emplace(g->database);
      g->ballast.emplace(data_dir / "ballast", core->options.ballast_bytes);
      g->ballast->restore();
    }
    sync_folder(data_dir);
    return std::unique_ptr<Store>(new Store(std::move(core)));
  } catch (const SqlError& error) {
    return fault_while_opening(error);
  } catch (const std::system_error& error) {
    return StoreFault{StoreFault::Kind::unusable, error.what()};
  }
}

Store::Answer<Insertion> Store::insert(const NewJob& job, const QueueLimits& limits) {
  return core_->run(Room::spare, [&](Core::Guts& g) -> Insertion {
    if (g.jobs->queued_in(job.team) >= limits.per_team) {
      return {Insertion::Outcome::team_queue_full, {}};
    }
    if (g.jobs->count(JobState::queued) >= limits.total) {
      return {Insertion::Outcome::total_queue_full, {}};
    }
    const std::string id = random_id("jb_");
    g.jobs->insert(id, job, core_->options.clock());
    const std::int64_t number = g.jobs->find(job.team, id).value().number;
    return {Insertion::Outcome::stored, g.jobs->with_texts(number).job};
  });
}

Store::Answer<std::optional<Claim>> Store::claim_next(int running_per_team) {
  return core_->run(Room::reserve, [&](Core::Guts& g) -> std::optional<Claim> {
    const auto number = g.jobs->next_queued(running_per_team, g.last_team);
    if (!number) return std::nullopt;
    Claim claim;
    claim.lease = random_id("");
    g.jobs->start(*number, claim.lease, core_->options.clock());
    claim.job = g.jobs->with_texts(*number).job;
    g.last_team = claim.job.team;
    return claim;
  });
}

Store::Answer<Standing> Store::standing(const std::string& id, const std::string& lease) {
  return core_->run(Room::reserve, [&](Core::Guts& g) {
    const std::optional<bool> stop = g.jobs->lease_standing(id, lease);
    return Standing{stop.has_value(), stop.value_or(false)};
  });
}

Store::Answer<bool> Store::finish(const std::string& id, const std::string& lease,
                                  const Outcome& outcome, Kept kept) {
  return core_->run(Room::reserve, [&](Core::Guts& g) {
    const UnixMillis now = core_->options.clock();
    const JobState state = outcome.succeeded ? JobState::succeeded : JobState::failed;
    const auto number = g.jobs->end_run(id, lease, state, now, now + kept.count());
    if (!number) return false;
    if (outcome.succeeded) {
      g.jobs->set_result(*number, outcome.result);
    } else {
      g.jobs->set_failure(*number, outcome.failure_code, outcome.failure_detail);
    }
    return true;
  });
}

Store::Answer<bool> Store::give_back(const std::string& id, const std::string& lease) {
  return core_->run(Room::reserve, [&](Core::Guts& g) { return g.jobs->give_back(id, lease); });
}

Store::Answer<Recovery> Store::recover(int max_attempts, Kept kept) {
  return core_->run(Room::reserve, [&](Core::Guts& g) {
    const UnixMillis now = core_->options.clock();
    Recovery recovery;
    recovery.crashed = g.jobs->fail_crashed(max_attempts, now, now + kept.count());
    recovery.queued_again = g.jobs->queue_again();
    return recovery;
  });
}

Store::Answer<Change> Store::cancel(const std::string& team, const std::string& id, Kept kept) {
  return core_->run(Room::reserve, [&](Core::Guts& g) -> Change {
    const auto found = g.jobs->find(team, id);
    if (!found) return {};
    const UnixMillis now = core_->options.clock();
    Change change;
    if (g.jobs->cancel(found->number, now, now + kept.count())) {
      change.effect = Change::Effect::changed;
    } else {
      change.effect = found->job.state == JobState::cancelled ? Change::Effect::unchanged
                                                              : Change::Effect::finished;
    }
    change.job = g.jobs->with_texts(found->number).job;
    return change;
  });
}

Store::Answer<Change> Store::request_stop(const std::string& team, const std::string& id) {
  return core_->run(Room::reserve, [&](Core::Guts& g) -> Change {
    const auto found = g.jobs->find(team, id);
    if (!found) return {};
    Change change;
    if (g.jobs->mark_stop(found->number)) {
      change.effect = Change::Effect::changed;
    } else {
      const bool repeated = found->job.stop_requested && (!is_final(found->job.state) ||
                                                          found->job.state == JobState::succeeded);
      change.effect = repeated ? Change::Effect::unchanged : Change::Effect::finished;
    }
    change.job = g.jobs->with_texts(found->number).job;
    return change;
  });
}

Store::Answer<Removal> Store::remove(const std::string& team, const std::string& id) {
  return core_->run(Room::reserve, [&](Core::Guts& g) {
    const auto found = g.jobs->find(team, id);
    if (!found) return Removal::not_found;
    if (!is_final(found->job.state)) return Removal::still_running;
    g.jobs->erase(found->number);
    return Removal::removed;
  });
}

Store::Answer<std::optional<JobRecord>> Store::find(const std::string& team,
                                                    const std::string& id) {
  return core_->run(Room::reserve, [&](Core::Guts& g) -> std::optional<JobRecord> {
    const auto found = g.jobs->find(team, id);
    if (!found) return std::nullopt;
    JobRecord job = g.jobs->with_texts(found->number).job;
    if (job.state == JobState::queued) {
      // In turn k every team with k jobs waiting is served once, beginning after the last team.
      const std::int64_t turn = g.jobs->place_in_team(team, found->number);
      const auto order = [&](const std::string& t) { return std::pair(t <= g.last_team, t); };
      std::int64_t place = turn;
      for (const TeamQueue& queue : g.jobs->queues()) {
        if (queue.team == team) continue;
        const bool served_before = order(queue.team) < order(team);
        place += std::min(queue.queued, served_before ? turn : turn - 1);
      }
      job.queue_position = static_cast<int>(place);
    }
    return job;
  });
}

Store::Answer<JobPage> Store::list(const std::string& team, std::optional<JobState> state, int size,
                                   std::optional<std::int64_t> before) {
  return core_->run(Room::reserve, [&](Core::Guts& g) {
    constexpr std::int64_t kNewest = std::numeric_limits<std::int64_t>::max();
    // One more than asked tells whether there is a next page.
    auto found = g.jobs->page(team, state, before.value_or(kNewest), size + 1);
    JobPage page;
    const bool more = found.size() > static_cast<std::size_t>(size);
    if (more) {
      found.pop_back();
      page.next_before = found.back().number;
    }
    for (NumberedJob& entry : found) page.jobs.push_back(std::move(entry.job));
    return page;
  });
}

Store::Answer<JobCounts> Store::counts() {
  return core_->run(Room::reserve, [](Core::Guts& g) {
    return JobCounts{g.jobs->count(JobState::queued), g.jobs->count(JobState::running),
                     g.jobs->count_all()};
  });
}

Store::Answer<int> Store::purge(int batch) {
  const auto purged = core_->run(Room::reserve, [&](Core::Guts& g) {
    const auto numbers = g.jobs->expired(core_->options.clock(), batch);
    for (std::int64_t number : numbers) g.jobs->erase(number);
    return static_cast<int>(numbers.size());
  });
  if (purged.ok()) core_->guts.lock()->ballast->restore();
  return purged;
}

std::uint64_t Store::free_bytes() {
  const auto inside = core_->run(Room::reserve, [](Core::Guts& g) {
    return static_cast<std::uint64_t>(g.database.pragma("freelist_count") *
                                      g.database.pragma("page_size"));
  });
  return inside.ok() ? available_bytes(core_->data_dir) + *inside : 0;
}

}  // namespace bandwright
