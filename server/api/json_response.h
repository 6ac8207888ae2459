// A JSON answer.
#pragma once

#include <string>
#include <utility>

#include "server/message/http.h"

namespace bandwright {

// Results belong to their callers: shared caches keep none of them.
inline Response json_response(int status, std::string body) {
  return {status,
          {{"Content-Type", "application/json"}, {"Cache-Control", "private, no-cache"}},
          std::move(body)};
}

}  // namespace bandwright
