// The preference to wait for a job (RFC 7240, "Prefer: wait=10").
#pragma once

#include <optional>

#include "server/message/http.h"

namespace bandwright {

// Seconds the client is willing to wait, at most limits::kWaitSeconds. A preference that makes no
// sense is as good as none: it is not an error (RFC 7240 section 2). The first of several counts.
std::optional<int> preferred_wait_s(const RequestHead& head);

}  // namespace bandwright
