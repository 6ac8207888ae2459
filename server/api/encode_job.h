// A job as its callers see it: the envelope, and the stored result spliced in as it is.
#pragma once

#include <string>

#include "server/api/json.h"
#include "server/message/job.h"

namespace bandwright {

// The whole body. The result's text is not read again, so a body costs no more than its copy. A
// record without an id (a run without a service) has no links and no times.
std::string job_text(const JobRecord& job);

// One entry of the list of jobs.
OrderedJson job_summary_json(const JobRecord& job);

// A strong validator: the stored version of a job that has ended, with a digest of the body while
// progress can change it.
std::string job_etag(const JobRecord& job, const std::string& body);

}  // namespace bandwright
