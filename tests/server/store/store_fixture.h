// What most tests of the store begin with.
#pragma once

#include <doctest/doctest.h>

#include <memory>
#include <string>
#include <utility>

#include "server/store/store.h"
#include "tests/server/temp_dir.h"

namespace bandwright {

inline constexpr Store::Kept kKept = std::chrono::hours(1);
inline constexpr QueueLimits kRoomy{1000, 10000};

// A fatal fault is a failed test, not the end of all tests.
inline StoreOptions test_options() {
  StoreOptions options;
  options.ballast_bytes = 0;
  options.on_fatal = [](const StoreFault& fault) { FAIL_CHECK("fatal: " << fault.detail); };
  return options;
}

inline std::unique_ptr<Store> open_store(const std::filesystem::path& dir,
                                         StoreOptions options = test_options()) {
  auto opened = Store::open(dir, std::move(options));
  if (!opened.ok()) FAIL("the store does not open: " << opened.error().detail);
  return std::move(*opened);
}

inline NewJob new_job(const std::string& team, const std::string& name = "whip") {
  return {team, name, "{\"name\": \"" + name + "\"}", "sha256:00", 7};
}

inline JobRecord insert(Store& store, const NewJob& job) {
  auto inserted = store.insert(job, kRoomy);
  REQUIRE(inserted.ok());
  REQUIRE(inserted->outcome == Insertion::Outcome::stored);
  return inserted->job;
}

inline Claim claim(Store& store, int running_per_team = 1000) {
  auto claimed = store.claim_next(running_per_team);
  REQUIRE(claimed.ok());
  REQUIRE(claimed->has_value());
  return std::move(**claimed);
}

inline JobRecord get(Store& store, const JobRecord& job) {
  auto found = store.find(job.team, job.id);
  REQUIRE(found.ok());
  REQUIRE(found->has_value());
  return **found;
}

inline bool finish(Store& store, const Claim& claim, const std::string& result = "{}") {
  const auto finished = store.finish(claim.job.id, claim.lease, {true, result, {}, {}}, kKept);
  REQUIRE(finished.ok());
  return *finished;
}

}  // namespace bandwright
