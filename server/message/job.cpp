#include "server/message/job.h"

#include <array>
#include <utility>

namespace bandwright {

namespace {

constexpr std::array<std::pair<JobState, std::string_view>, 6> kNames = {{
    {JobState::queued, "queued"},
    {JobState::running, "running"},
    {JobState::succeeded, "succeeded"},
    {JobState::failed, "failed"},
    {JobState::cancelled, "cancelled"},
    {JobState::expired, "expired"},
}};

}  // namespace

std::string_view job_state_name(JobState state) {
  for (const auto& [known, name] : kNames) {
    if (known == state) return name;
  }
  return {};
}

std::optional<JobState> job_state_from_name(std::string_view name) {
  for (const auto& [state, known] : kNames) {
    if (known == name) return state;
  }
  return std::nullopt;
}

}  // namespace bandwright
