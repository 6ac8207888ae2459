// How a long computation is ended from outside and watched while it runs.
//
// Thread safety: all members may be called from any thread. The computation polls `should_end()`
// at least every few milliseconds.
#pragma once

#include <atomic>
#include <chrono>
#include <cstdint>
#include <optional>

namespace bandwright {

enum class EndCause { none, stopped, cancelled, deadline };

struct Progress {
  double fraction = 0;
  std::uint64_t evaluations = 0;
  int topologies_done = 0;
  int topologies = 0;
  std::optional<double> best_margin_db;  // of the values searched, before parts are chosen
};

class RunControl {
 public:
  using Clock = std::chrono::steady_clock;

  RunControl() = default;
  // The deadline may be set once, before the computation starts.
  void set_deadline(Clock::time_point deadline) { deadline_ = deadline; }

  // Finish now and report the best so far.
  void request_stop() { raise(EndCause::stopped); }
  // Finish now; the result will be thrown away.
  void request_cancel() { cause_.store(EndCause::cancelled); }

  bool should_end() {
    if (cause_.load(std::memory_order_relaxed) != EndCause::none) return true;
    if (Clock::now() < deadline_) return false;
    raise(EndCause::deadline);
    return true;
  }
  EndCause cause() const { return cause_.load(); }

  void set_topologies(int count) { topologies_ = count; }
  void topology_done() { ++topologies_done_; }
  void add_evaluations(std::uint64_t count) { evaluations_ += count; }
  void set_fraction(double fraction) { fraction_ = fraction; }
  // Keeps the larger margin.
  void offer_margin_db(double margin_db) {
    double held = best_margin_db_.load();
    while (margin_db > held && !best_margin_db_.compare_exchange_weak(held, margin_db)) {
    }
  }

  Progress progress() const {
    Progress p{fraction_, evaluations_, topologies_done_, topologies_, std::nullopt};
    if (best_margin_db_ > kNoMargin) p.best_margin_db = best_margin_db_.load();
    return p;
  }

 private:
  static constexpr double kNoMargin = -1e300;

  void raise(EndCause cause) {
    EndCause none = EndCause::none;
    cause_.compare_exchange_strong(none, cause);
  }

  std::atomic<EndCause> cause_{EndCause::none};
  Clock::time_point deadline_ = Clock::time_point::max();
  std::atomic<double> fraction_{0};
  std::atomic<std::uint64_t> evaluations_{0};
  std::atomic<int> topologies_done_{0};
  std::atomic<int> topologies_{0};
  std::atomic<double> best_margin_db_{kNoMargin};
};

}  // namespace bandwright
