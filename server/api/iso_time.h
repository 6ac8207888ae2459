// Times as ISO 8601 with milliseconds, UTC: "2026-03-01T09:30:00.250Z".
#pragma once

#include <string>

#include "server/message/job.h"

namespace bandwright {

std::string iso_time(UnixMillis time);

}  // namespace bandwright
