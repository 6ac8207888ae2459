// From a request's text to its result's, with and without the service around it.
#include <chrono>

#include "server/api/api.h"
#include "server/api/decode_request.h"
#include "server/api/digest.h"
#include "server/api/encode_job.h"
#include "server/api/encode_report.h"
#include "server/api/json_reader.h"
#include "server/api/problem_details.h"
#include "solver/solver/solver.h"

namespace bandwright {
namespace {

void set_deadline(RunControl& control, double run_seconds) {
  const std::chrono::duration<double> seconds(run_seconds);
  control.set_deadline(RunControl::Clock::now() +
                       std::chrono::duration_cast<RunControl::Clock::duration>(seconds));
}

std::string run(const JobRequest& request, RunControl& control, int threads) {
  set_deadline(control, request.run_seconds);
  return report_text(solve(request.problem, threads, control), request);
}

ExecutionResult failure(std::string code, std::string detail) {
  return {false, "", std::move(code), std::move(detail)};
}

}  // namespace

ExecutionResult execute_job(const JobRecord& job, RunControl& control, int threads) {
  const auto document = read_json(job.request);
  if (!document) return failure("request", document.error().detail);
  // A stored request was accepted once; an update may have become stricter since.
  const auto request = decode_job_request(*document);
  if (!request) {
    const Fault& first = request.error().front();
    return failure("request", first.pointer + ": " + first.detail);
  }
  try {
    return {true, run(*request, control, threads), "", ""};
  } catch (const std::bad_alloc&) {
    return failure("memory", "the job needs more memory than there is");
  } catch (const std::exception&) {
    return failure("internal", "the engine failed on this request");
  }
}

SolveOnce solve_once(std::string_view request_text, int threads) {
  const auto document = read_json(request_text);
  if (!document) {
    return {false, problem_text(400, "The request cannot be read: " + document.error().detail + ".",
                                "", std::span(&document.error(), 1))};
  }
  const auto request = decode_job_request(*document);
  if (!request) {
    return {false, problem_text(422, "The request was read and has faults.", "", request.error())};
  }
  RunControl control;
  JobRecord job;
  job.name = request->name;
  job.state = JobState::succeeded;
  job.request_digest = sha256_text(json_text(*document));
  job.seed = request->problem.search.seed;
  job.result = run(*request, control, threads);
  return {true, job_text(job)};
}

}  // namespace bandwright
