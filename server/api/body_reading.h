// The body of a request as a document, or the response that refuses it.
#pragma once

#include <optional>
#include <span>
#include <string_view>

#include "server/api/fault.h"
#include "server/api/json.h"
#include "server/message/http.h"
#include "solver/base/result.h"

namespace bandwright {

// 400 if it cannot be read as JSON.
Result<Json, Response> read_body(const Request& request);

// For routes whose body has nothing to say: it may be missing or {}.
std::optional<Response> check_empty_body(const Request& request);

// The one answer to a document that was read and is wrong.
Response unprocessable(std::span<const Fault> faults, std::string_view request_id);

}  // namespace bandwright
