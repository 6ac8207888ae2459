// Every refusal as application/problem+json (RFC 9457).
#pragma once

#include <span>
#include <string>
#include <string_view>

#include "server/api/fault.h"
#include "server/message/http.h"
#include "server/message/job.h"

namespace bandwright {

// "Not Found" for 404.
std::string_view status_phrase(int status);

// The faults, if any, become the member "errors". `request_id` identifies the request to whoever
// reads the log.
Response problem_response(int status, std::string_view detail, std::string_view request_id,
                          std::span<const Fault> faults = {});

// The document alone.
std::string problem_text(int status, std::string_view detail, std::string_view request_id,
                         std::span<const Fault> faults = {});

// What the job service refused, as a status with Retry-After where waiting helps.
Response refusal_response(Refusal refusal, std::string_view request_id);

}  // namespace bandwright
