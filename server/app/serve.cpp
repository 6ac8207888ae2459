#include "server/app/serve.h"

#include <spdlog/logger.h>

#include <algorithm>
#include <atomic>
#include <csignal>
#include <cstdlib>
#include <memory>
#include <optional>
#include <string>
#include <thread>
#include <utility>

#include "server/app/core_count.h"
#include "server/app/settings.h"
#include "server/app/stop_signals.h"
#include "server/http/log_line.h"
#include "server/http/server.h"
#include "server/store/store.h"

namespace bandwright {
namespace {

using Logger = std::shared_ptr<spdlog::logger>;
using Clock = std::chrono::steady_clock;

constexpr int kExitFailure = 1;
constexpr int kExitUnavailable = 69;
constexpr int kExitStore = 74;
constexpr int kSignalBase = 128;
constexpr std::chrono::seconds kRequestGrace{5};
constexpr std::chrono::seconds kHardLimitAfterJobs{9};
constexpr std::chrono::seconds kHurryLimit{5};

StoreOptions store_options(const Logger& logger) {
  StoreOptions options;
  // Neither retried nor unwound: the file must not be touched again by this process.
  options.on_fatal = [logger](const StoreFault& fault) {
    logger->critical(LogLine("the store failed").add("detail", fault.detail).text());
    logger->flush();
    std::_Exit(kExitStore);
  };
  return options;
}

int report_store_fault(const Logger& logger, const StoreFault& fault) {
  const bool locked = fault.kind == StoreFault::Kind::locked;
  logger->critical(LogLine(locked ? "the data folder is in use by another process"
                                  : "the data folder cannot be used")
                       .add("detail", fault.detail)
                       .text());
  if (locked) return kExitUnavailable;
  return fault.kind == StoreFault::Kind::failed ? kExitStore : kExitFailure;
}

// Watches over the orderly end: the first signal that comes now makes it hurry, the next one, or
// the limit, ends the process.
class StopWatch {
 public:
  StopWatch(const StopSignals& signals, Clock::time_point limit, JobService& jobs, Logger logger)
      : signals_(signals), limit_(limit), jobs_(jobs), logger_(std::move(logger)) {
    watch_ = std::thread([this] { watch(); });
  }
  ~StopWatch() {
    done_ = true;
    watch_.join();
    if (hurry_.joinable()) hurry_.join();
  }
  StopWatch(const StopWatch&) = delete;
  StopWatch& operator=(const StopWatch&) = delete;

  bool hurried() const { return hurried_; }

 private:
  void watch() {
    while (!done_) {
      const std::optional<int> signal = signals_.wait_for(std::chrono::milliseconds(50));
      if (signal && !hurried_) {
        hurry();
      } else if (signal || Clock::now() >= limit_) {
        logger_->warn(LogLine("stopped at once").text());
        std::_Exit(signal ? kSignalBase + *signal : kExitFailure);
      }
    }
  }

  void hurry() {
    logger_->info(LogLine("stopping in a hurry").text());
    hurried_ = true;
    limit_ = std::min(limit_, Clock::now() + kHurryLimit);
    // A second call shortens the grace of the first and returns with it.
    hurry_ = std::thread([this] { jobs_.shutdown(std::chrono::milliseconds(0)); });
  }

  const StopSignals& signals_;
  Clock::time_point limit_;
  JobService& jobs_;
  const Logger logger_;
  std::atomic<bool> done_{false};
  std::atomic<bool> hurried_{false};
  std::thread hurry_;
  std::thread watch_;
};

void wait_and_stop(const StopSignals& signals, std::chrono::seconds job_grace, JobService& jobs,
                   Server& server, const Logger& logger) {
  const int signal = signals.wait();
  logger->info(LogLine("stopping").add("signal", signal).text());
  const StopWatch watch(signals, Clock::now() + job_grace + kHardLimitAfterJobs, jobs, logger);
  jobs.shutdown(job_grace);
  server.shutdown(watch.hurried() ? std::chrono::seconds(0) : kRequestGrace);
  logger->info(LogLine("stopped").text());
}

}  // namespace

int serve(const LoadedConfig& loaded) {
  const Config& config = loaded.config;
  // Before any thread, which would otherwise take the signals.
  const StopSignals signals;
  // A closed log or client is an error where it happens, no end of the process.
  std::signal(SIGPIPE, SIG_IGN);
  const Logger logger = make_json_logger(config.log_level);
  for (const std::string& warning : loaded.warnings) {
    logger->warn(LogLine("configuration").add("detail", warning).text());
  }

  auto store = Store::open(config.data, store_options(logger));
  if (!store) return report_store_fault(logger, store.error());
  const int threads = threads_or_cores(config.threads);
  const Executor executor = [threads](const JobRecord& job, RunControl& control) {
    return execute_job(job, control, threads);
  };
  JobServiceOptions job_setup = job_options(config);
  job_setup.on_internal_fault = [logger](const std::string& id, const std::string& what) {
    logger->error(LogLine("job failed inside").add("job", id).add("detail", what).text());
  };
  JobService jobs(**store, executor, job_setup);
  const std::unique_ptr<Handler> api = make_api(jobs, api_options(config));
  Server server(*api, server_options(config), logger);

  // The address first: without it, jobs left by an earlier process stay as they are.
  if (const auto failure = server.start()) {
    logger->critical(LogLine("cannot serve").add("detail", *failure).text());
    return kExitUnavailable;
  }
  jobs.start();
  logger->info(LogLine("listening")
                   .add("address", parse_listen(config.listen)->host)
                   .add("port", server.port())
                   .add("version", BANDWRIGHT_VERSION)
                   .text());
  wait_and_stop(signals, std::chrono::seconds(config.shutdown_seconds), jobs, server, logger);
  return 0;
}

}  // namespace bandwright
