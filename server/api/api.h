// The service's face: routes, JSON in and out, and every refusal as problem+json.
//
// JSON exists only in this folder. A request text is decoded, with all its faults, into a Problem;
// a Report is written out as text; jobs and store carry both as opaque bytes.
#pragma once

#include <cstdint>
#include <memory>
#include <string>
#include <string_view>
#include <vector>

#include "server/jobs/job_service.h"
#include "server/message/http.h"
#include "server/message/job.h"
#include "solver/base/run_control.h"

namespace bandwright {

struct ApiOptions {
  std::uint64_t max_body_bytes = 1u << 20;
  // Host header values answered, with or without a port; anything else is 421.
  std::vector<std::string> hosts = {"127.0.0.1", "localhost", "[::1]"};
  int analysis_threads = 1;
};

std::unique_ptr<Handler> make_api(JobService& jobs, ApiOptions options);

// The executor of the job service: request text to result text, on `threads` threads.
ExecutionResult execute_job(const JobRecord& job, RunControl& control, int threads);

// `bandwrightd solve`: the same request without a server.
struct SolveOnce {
  bool accepted = false;
  std::string text;  // the job's final body when accepted, problem+json when not
};
SolveOnce solve_once(std::string_view request_text, int threads);

// The OpenAPI document this build serves at /openapi.json, as JSON text.
std::string_view openapi_json();

}  // namespace bandwright
