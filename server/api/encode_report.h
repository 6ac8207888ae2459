// A finished run as the text that is stored with its job.
#pragma once

#include <string>
#include <vector>

#include "server/api/decode_request.h"
#include "solver/solver/report.h"

namespace bandwright {

// {"name": "bandwright", "version": ...} of this build.
OrderedJson engine_json();

// What holds for every result: it is computed, and what it does not assess.
const std::vector<std::string>& cautions();

// One JSON object: engine, progress, stop_reason, reproducible, assumptions, warnings, cautions,
// unmatched, designs. Equal reports give equal bytes. Throws std::logic_error as design_json().
std::string report_text(const Report& report, const JobRequest& request);

// The answer to an analysis: the body of one design, with assumptions and cautions.
std::string analysis_text(const Design& design, const AnalysisRequest& request);

}  // namespace bandwright
