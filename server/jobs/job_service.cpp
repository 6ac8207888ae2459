#include "server/jobs/job_service.h"

#include <algorithm>
#include <condition_variable>
#include <exception>
#include <thread>
#include <utility>
#include <vector>

#include "server/jobs/done_watch.h"
#include "server/jobs/page_token.h"
#include "server/jobs/running.h"
#include "server/store/guarded.h"

namespace bandwright {

namespace {

using Clock = std::chrono::steady_clock;

constexpr int kPurgeBatch = 100;
// How long to leave a store alone that had no room for a change.
constexpr std::chrono::seconds kFullDiskPause{1};

// A store that has failed ends the process; until then nothing is taken or changed.
Refusal refusal_of(const StoreFault& fault) {
  return fault.kind == StoreFault::Kind::disk_full ? Refusal::disk_full : Refusal::shutting_down;
}

}  // namespace

struct JobService::State {
  State(Store& s, Executor e, JobServiceOptions o)
      : store(s), executor(std::move(e)), options(std::move(o)) {}

  struct Shared {
    Running running;
    bool started = false;
    bool recovered = false;  // jobs of an earlier process are taken care of: claims may begin
    bool stopping = false;
    bool down = false;
    std::uint64_t news = 0;  // grows when a claim may succeed that did not before
    Clock::time_point grace_end = Clock::time_point::max();
  };

  void work();
  std::optional<Claim> next_claim();
  bool enter(const Claim& claim, const std::shared_ptr<Run>& run);
  void run(const Claim& claim, Run& run);
  ExecutionResult execute(const Claim& claim, RunControl& control);
  void record(const Claim& claim, const ExecutionResult& result);
  void recover();
  std::chrono::milliseconds housekeep();
  void tell_workers();
  std::optional<JobRecord> find(const std::string& team, const std::string& id);
  Result<JobRecord, Refusal> answer(const Result<Change, StoreFault>& change);

  Store& store;
  const Executor executor;
  const JobServiceOptions options;
  Guarded<Shared> shared;
  std::condition_variable changed;
  std::vector<std::thread> workers;
  // Last, so that its thread ends before what it uses.
  DoneWatch watch{[this](const DoneWatch::Key& key) { return find(key.first, key.second); },
                  [this] { return housekeep(); }};
};

void JobService::State::work() {
  while (const std::optional<Claim> claim = next_claim()) {
    const auto handle = std::make_shared<Run>();
    handle->lease = claim->lease;
    if (!enter(*claim, handle)) return;
    run(*claim, *handle);
    shared.lock()->running.remove(claim->job.id);
    tell_workers();
    watch.ended({claim->job.team, claim->job.id});
  }
}

// Waits until there is a job to run; nothing when the service is stopping.
std::optional<Claim> JobService::State::next_claim() {
  for (;;) {
    std::uint64_t seen = 0;
    {
      auto s = shared.lock();
      changed.wait(s.lock(), [&] { return s->stopping || s->recovered; });
      if (s->stopping) return std::nullopt;
      seen = s->news;
    }
    auto claim = store.claim_next(options.running_per_team);
    if (claim.ok() && *claim) return std::move(*claim);
    auto s = shared.lock();
    const auto woken = [&] { return s->stopping || s->news != seen; };
    if (claim.ok()) {
      changed.wait(s.lock(), woken);
    } else {
      changed.wait_for(s.lock(), kFullDiskPause, woken);
    }
  }
}

// Makes the run reachable for cancel, stop and shutdown; false if the service began to stop while
// the job was being claimed.
bool JobService::State::enter(const Claim& claim, const std::shared_ptr<Run>& run) {
  {
    auto s = shared.lock();
    if (!s->stopping) {
      s->running.add(claim.job.id, run);
      return true;
    }
  }
  store.give_back(claim.job.id, claim.lease);
  return false;
}

void JobService::State::run(const Claim& claim, Run& run) {
  // A cancel or stop changes the store first and then looks for the run; a run is entered first
  // and then looks at the store. So one of the two always sees the other.
  const auto standing = store.standing(claim.job.id, claim.lease);
  if (!standing.ok() || !standing->lease_current) return;
  if (standing->stop_requested) run.control.request_stop();

  const ExecutionResult result = execute(claim, run.control);
  {
    auto s = shared.lock();
    if (run.abandoned) return;
    run.returned = true;
  }
  record(claim, result);
}

ExecutionResult JobService::State::execute(const Claim& claim, RunControl& control) {
  std::string what = "an exception of an unknown type";
  try {
    return executor(claim.job, control);
  } catch (const std::exception& error) {
    what = error.what();
  } catch (...) {
  }
  if (options.on_internal_fault) options.on_internal_fault(claim.job.id, what);
  return {false, {}, "internal", "The run ended with an internal fault of the service."};
}

// Without a current lease this has no effect, which is what cancelled jobs rely on.
void JobService::State::record(const Claim& claim, const ExecutionResult& result) {
  Outcome outcome{result.ok, result.result, result.failure_code, result.failure_detail};
  for (;;) {
    const auto recorded = store.finish(claim.job.id, claim.lease, outcome, options.results_kept);
    if (recorded.ok() || recorded.error().kind != StoreFault::Kind::disk_full) return;
    // There may be room for less. A job still unrecorded when the service stops runs again.
    if (outcome.succeeded) {
      outcome = {false, {}, "storage_full", "There was no room to store the result."};
      continue;
    }
    auto s = shared.lock();
    if (changed.wait_for(s.lock(), kFullDiskPause, [&] { return s->stopping; })) return;
  }
}

void JobService::State::recover() {
  {
    // Held throughout: a second recovery would take a job from a worker that has just claimed it.
    auto s = shared.lock();
    if (!s->started || s->recovered) return;
    s->recovered = store.recover(options.max_attempts, options.results_kept).ok();
  }
  tell_workers();
}

// Returns the pause until it is to be called again.
std::chrono::milliseconds JobService::State::housekeep() {
  const auto purged = store.purge(kPurgeBatch);
  recover();
  if (purged.ok() && *purged == kPurgeBatch) return std::chrono::milliseconds(0);
  return options.purge_every;
}

void JobService::State::tell_workers() {
  ++shared.lock()->news;
  changed.notify_all();
}

std::optional<JobRecord> JobService::State::find(const std::string& team, const std::string& id) {
  auto found = store.find(team, id);
  if (!found.ok() || !*found) return std::nullopt;
  JobRecord& job = **found;
  if (job.state == JobState::running) {
    if (const auto run = shared.lock()->running.find(id)) job.progress = progress_of(run->control);
  }
  return std::move(job);
}

Result<JobRecord, Refusal> JobService::State::answer(const Result<Change, StoreFault>& change) {
  if (!change.ok()) return refusal_of(change.error());
  switch (change->effect) {
    case Change::Effect::not_found:
      return Refusal::not_found;
    case Change::Effect::finished:
      return Refusal::finished;
    case Change::Effect::changed:
    case Change::Effect::unchanged:
      break;
  }
  return change->job;
}

JobService::JobService(Store& store, Executor executor, JobServiceOptions options)
    : state_(std::make_unique<State>(store, std::move(executor), std::move(options))) {}

JobService::~JobService() {
  shutdown(std::chrono::milliseconds(0));
}

void JobService::start() {
  {
    auto s = state_->shared.lock();
    if (s->started || s->stopping) return;
    s->started = true;
    for (int i = 0; i < state_->options.workers; ++i) {
      state_->workers.emplace_back([state = state_.get()] { state->work(); });
    }
  }
  // If the disk is too full for that now, housekeeping tries again and the workers wait for it.
  state_->recover();
}

void JobService::shutdown(std::chrono::milliseconds grace) {
  State& state = *state_;
  auto s = state.shared.lock();
  const bool first = !std::exchange(s->stopping, true);
  s->grace_end = std::min(s->grace_end, Clock::now() + grace);
  state.changed.notify_all();
  if (!first) {
    state.changed.wait(s.lock(), [&] { return s->down; });
    return;
  }
  // Another call may bring the end of the grace nearer.
  while (!s->running.empty() && Clock::now() < s->grace_end) {
    state.changed.wait_until(s.lock(), s->grace_end);
  }
  const auto abandoned = s->running.abandon();
  s.lock().unlock();

  // Given back before the workers notice: a process killed meanwhile has lost no attempt.
  for (const auto& [id, run] : abandoned) state.store.give_back(id, run->lease);
  for (std::thread& worker : state.workers) worker.join();
  state.watch.close();

  s.lock().lock();
  s->down = true;
  state.changed.notify_all();
}

bool JobService::accepting() const {
  auto s = state_->shared.lock();
  return s->started && s->recovered && !s->stopping;
}

Result<JobRecord, Refusal> JobService::submit(const NewJob& job) {
  if (state_->shared.lock()->stopping) return Refusal::shutting_down;
  if (state_->store.free_bytes() < state_->options.min_free_bytes) return Refusal::disk_full;
  auto inserted = state_->store.insert(
      job, QueueLimits{state_->options.queue_per_team, state_->options.queue_total});
  if (!inserted.ok()) return refusal_of(inserted.error());
  switch (inserted->outcome) {
    case Insertion::Outcome::team_queue_full:
      return Refusal::team_queue_full;
    case Insertion::Outcome::total_queue_full:
      return Refusal::service_full;
    case Insertion::Outcome::stored:
      break;
  }
  state_->tell_workers();
  return std::move(inserted->job);
}

std::optional<JobRecord> JobService::find(const std::string& team, const std::string& id) const {
  return state_->find(team, id);
}

Result<JobSummaryPage, Refusal> JobService::list(const JobListQuery& query) const {
  std::optional<std::int64_t> before;
  if (!query.page_token.empty()) {
    before = read_page_token(query.page_token);
    if (!before) return Refusal::bad_page_token;
  }
  constexpr int kMostPerPage = 500;
  const int size = std::clamp(query.page_size, 1, kMostPerPage);
  auto page = state_->store.list(query.team, query.state, size, before);
  if (!page.ok()) return refusal_of(page.error());
  JobSummaryPage answer{std::move(page->jobs), std::nullopt};
  if (page->next_before) answer.next_page = page_token(*page->next_before);
  return answer;
}

Result<JobRecord, Refusal> JobService::stop(const std::string& team, const std::string& id) {
  auto change = state_->store.request_stop(team, id);
  if (change.ok() && change->effect == Change::Effect::changed) {
    if (const auto run = state_->shared.lock()->running.find(id)) run->control.request_stop();
  }
  return state_->answer(change);
}

Result<JobRecord, Refusal> JobService::cancel(const std::string& team, const std::string& id) {
  auto change = state_->store.cancel(team, id, state_->options.results_kept);
  if (change.ok() && change->effect == Change::Effect::changed) {
    if (const auto run = state_->shared.lock()->running.find(id)) run->control.request_cancel();
    state_->tell_workers();
    state_->watch.ended({team, id});
  }
  return state_->answer(change);
}

std::optional<Refusal> JobService::remove(const std::string& team, const std::string& id) {
  const auto removal = state_->store.remove(team, id);
  if (!removal.ok()) return refusal_of(removal.error());
  switch (*removal) {
    case Removal::not_found:
      return Refusal::not_found;
    case Removal::still_running:
      return Refusal::still_running;
    case Removal::removed:
      break;
  }
  return std::nullopt;
}

void JobService::when_done(const std::string& team, const std::string& id,
                           std::chrono::steady_clock::time_point deadline,
                           std::function<void(std::optional<JobRecord>)> callback) {
  state_->watch.add({team, id}, deadline, std::move(callback));
  // The job may have ended before anyone watched it.
  const auto job = state_->find(team, id);
  if (!job || is_final(job->state)) state_->watch.ended({team, id});
}

}  // namespace bandwright
