// What a client sends and what it is ready to receive (RFC 9110 sections 8.3 and 12.5.1).
#pragma once

#include <string_view>

#include "server/message/http.h"

namespace bandwright {

// Whether the Accept fields allow `type` ("application/json"). No field allows everything.
bool accepts(const RequestHead& head, std::string_view type);

// Whether `value` is a Content-Type of JSON in UTF-8.
bool is_json_type(std::string_view value);

// Whether If-None-Match names `etag`, or anything.
bool none_match_names(const RequestHead& head, std::string_view etag);

}  // namespace bandwright
