// A request document to a problem, with every fault it has and every default it used.
#pragma once

#include <string>
#include <vector>

#include "server/api/fault.h"
#include "server/api/json.h"
#include "solver/base/result.h"
#include "solver/rf/problem.h"
#include "solver/solver/solver.h"

namespace bandwright {

struct JobRequest {
  std::string name;
  Problem problem;
  double run_seconds = 0;
  std::vector<std::string> assumptions;  // "#/parts/inductor/values: E24 (default)"
};

struct AnalysisRequest {
  std::string name;
  Problem problem;  // one topology, all of it fixed
  Values values;
  SweepRange sweep;
  std::vector<std::string> assumptions;
};

// The body of POST /v1/jobs.
Result<JobRequest, std::vector<Fault>> decode_job_request(const Json& document);
// The body of POST /v1/analyses.
Result<AnalysisRequest, std::vector<Fault>> decode_analysis_request(const Json& document);

}  // namespace bandwright
